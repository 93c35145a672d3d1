import type { BenchHeadProps } from '@/components/bench';
import type { RibbonData } from '@/components/ribbon';

export type BenchStep = {
  key: string;
  visitId: string | null;
  kind: 'start' | 'set dose' | 'sample' | 'check' | 'collect';
  instruction: string;
  act: string;
  next: string | null;
  due: string | null;
  earliest: string | null;
  latest: string | null;
  done: boolean;
  doneAt: string | null;
  outcome: 'done' | 'late' | 'skipped' | null;
};

export type BenchRoomProps = {
  now: string;
  zone: string;
  studyId: string;
  session: { id: string; state: string; startsAt: string; person: string; mine: boolean };
  run: { id: string; number: number; state: string; dose: number; set: boolean };
  head: BenchHeadProps;
  ribbon?: RibbonData;
  steps: BenchStep[];
  readouts: { symbol: string; unit: string }[];
  recordsItself: boolean;
  stopRules: string;
  ceiling: string | null;
  records: boolean;
  remarks: { id: string; text: string }[];
  stops: { id: string; mine: boolean; at: string; text: string }[];
  /** Something of this session was recorded by this person, and may still be taken back. */
  doneBy: boolean;
};
