import type { JobState, RunState, SeriesState, SessionState } from '@/db/schema';
import { AppError } from './errors';

/** One table a thing: which state may follow which. */
const run: Record<RunState, readonly RunState[]> = {
  planned: ['settling', 'suspended', 'cancelled', 'lost'],
  tentative: ['planned', 'suspended', 'cancelled', 'lost'],
  settling: ['recording', 'recorded', 'suspended', 'lost'],
  recording: ['recorded', 'suspended', 'lost'],
  recorded: [],
  suspended: ['planned', 'tentative', 'settling', 'recording', 'cancelled', 'lost'],
  cancelled: [],
  lost: [],
};
const session: Record<SessionState, readonly SessionState[]> = {
  planned: ['started', 'missed', 'suspended', 'cancelled'],
  started: ['done', 'suspended', 'planned'],
  done: ['started'],
  missed: ['started', 'cancelled'],
  suspended: ['planned', 'started', 'cancelled'],
  cancelled: [],
};
const series: Record<SeriesState, readonly SeriesState[]> = {
  draft: ['submitted', 'approved', 'superseded'],
  submitted: ['draft', 'approved', 'superseded'],
  approved: ['superseded'],
  superseded: [],
};
const job: Record<JobState, readonly JobState[]> = {
  queued: ['running', 'cancelled', 'failed'],
  running: ['done', 'failed', 'cancelled'],
  done: [],
  failed: [],
  cancelled: [],
};
export const transitions = { run, session, series, job } as const;

type Tables = typeof transitions;
type StateOf<K extends keyof Tables> = keyof Tables[K] & string;

export function canAdvance<K extends keyof Tables>(kind: K, from: StateOf<K>, to: StateOf<K>) {
  const next = transitions[kind][from as keyof Tables[K]] as readonly string[];
  return next.includes(to);
}

/** Throws `conflict`, in words, when the step is not in the table. */
export function assertAdvance<K extends keyof Tables>(
  kind: K,
  from: StateOf<K>,
  to: StateOf<K>,
): void {
  if (canAdvance(kind, from, to)) return;
  throw new AppError('conflict', `This ${kind} is ${from} and cannot become ${to}.`, {
    mend: 'Reload the page to see how it stands now.',
  });
}
