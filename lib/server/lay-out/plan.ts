import type { PlannedVisit } from '@/lib/planner/cadence/visit-times';

export type { PlannedVisit };

import type { LayOutRequest } from '@/lib/contracts';

/** One run that a lay-out has to place; `bookingId` is its name in the engine's request. */
export type RunPlan = {
  bookingId: string;
  levelId: string;
  position: number;
  preparation: { id: string; code: string; isNew: boolean };
  pass: number;
  direction: 'up' | 'down' | null;
  dose: number;
  control: number;
  minutes: number;
  visits: PlannedVisit[];
};

/** Input of a lay-out job: the engine's question, and what its answer will be made into. */
export type LayOutPlan = {
  studyId: string;
  seriesVersionId: string;
  seriesRevision: number;
  /** The calendar as it was when the question was put. */
  calendarStamp: string;
  request: LayOutRequest;
  runs: RunPlan[];
};
