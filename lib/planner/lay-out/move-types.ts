import type { IANAZone } from 'luxon';
import type { Hours } from '../../contracts/lay-out';
import type { Span } from './spans';

/** A session as it stands in the calendar. Instants are ISO 8601 with an offset. */
export type PlacedSession = {
  id: string;
  title?: string;
  /** The booking (the run's stay on a rig) that the session belongs to. */
  booking: string;
  rig: string | null;
  people: string[];
  from: string;
  to: string;
  /** The session must begin between these two. */
  earliest?: string;
  latest?: string;
  skills?: string[];
  /** Sessions of one round may be one person's at the same time. */
  round?: string;
};

/** A run's whole stay on a rig, of which its sessions are moments. */
export type Occupation = { booking: string; title?: string; rig: string; from: string; to: string };

export type MoveLab = {
  timeZone: string;
  /** Where recurrences of working hours start; by default eight days before the move. */
  hoursFrom?: string;
  sessions: PlacedSession[];
  occupations?: Occupation[];
  /** Wash-out between runs: elapsed minutes from the end of `before` to the start of `after`. */
  gaps?: { before: string; after: string; gapMin: number; gapMax?: number }[];
  people: {
    id: string;
    name?: string;
    skills?: string[];
    hours: Hours[];
    away?: { from: string; to: string }[];
    maxMinutesPerDay?: number;
    minRestHours?: number;
  }[];
  rigs: { id: string; name?: string; capacity?: number; open?: Hours[] }[];
  closed?: { from: string; to: string }[];
};

export type MoveChange = {
  session: string;
  from: string;
  to: string;
  /** Left out: as before. */
  people?: string[];
  rig?: string | null;
  /** The run's new stay, when the move shifts the whole run. */
  occupation?: { from: string; to: string };
};

export type ConflictCode =
  | 'unknown-session'
  | 'unknown-person'
  | 'unknown-rig'
  | 'ends-before-start'
  | 'outside-window'
  | 'closed'
  | 'nobody-works'
  | 'outside-hours'
  | 'away'
  | 'double-booked'
  | 'lacks-skill'
  | 'day-full'
  | 'rest-short'
  | 'rig-held'
  | 'rig-shut'
  | 'gap-short'
  | 'gap-long';
export type Conflict = { code: ConflictCode; text: string };

/** A proposed move, read and with everything left out filled in. */
export type Move = {
  lab: MoveLab;
  zone: IANAZone;
  anchor: number;
  session: PlacedSession;
  span: Span;
  people: string[];
  rig: string | null;
  occupation: Span | null;
};
