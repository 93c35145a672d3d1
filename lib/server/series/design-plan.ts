import type { Control, DesignRequest, PredictAnswer } from '@/lib/contracts';
import type { Belief } from '@/lib/planner/replan/belief';
import type { DoneLevel } from '@/lib/planner/replan/propose-levels';
import type { Envelope } from '@/lib/planner/replan/within-envelope';
import type { Scheme } from './types';

/** Input of a design job: one engine request an edge, and what its levels are timed by. */
export type DesignPlan = {
  studyId: string;
  predictionId: string;
  scheme: Scheme;
  reason: string;
  requests: DesignRequest[];
  control: Control;
  timeUnit: string;
  /** What the timing of a level needs of the prediction. */
  outlook: Pick<PredictAnswer, 'branch' | 'cycles' | 'onsets'>;
  noise: { readout: string; sd: number } | null;
  settleCapMinutes: number | null;
  recordCapMinutes: number | null;
  /** The version whose approval may cover the new one. */
  replanned: boolean;
  /** Present when the levels are chosen from the evidence, within the approval in force. */
  replan?: ReplanPart;
};

/** What the evidence so far adds: one belief a request, the approval, and what was done. */
export type ReplanPart = {
  /** In the order of the plan's requests, on the control axis. */
  beliefs: Belief[];
  envelope: Envelope;
  done: DoneLevel[];
};

export type DesignedLevel = {
  position: number;
  dose: number;
  control: number;
  purpose: 'baseline' | 'approach' | 'onset' | 'far side';
  replicates: number;
  settleMinutes: number;
  recordMinutes: number;
  intervalMinutes: number;
  notes: string[];
};
