import { allowedRigs, earliestPlace, startBounds } from './place';
import type { Job } from './problem';
import { LEAST_LOADED, type Taste } from './staff';
import type { State } from './state';
import { GRID } from './time';

const MAX_DEPTH = 8;
/** Pushes that one insertion may make in all, those of predecessors' predecessors included. */
const MAX_PUSHES = 120;
type Patience = { pushes: number };

/** A booking and all that follow it, directly or through others. */
export function withFollowers(state: State, indices: readonly number[]): Set<number> {
  const all = new Set(indices);
  for (const i of all) for (const f of state.problem.jobs[i]!.followers) all.add(f);
  return all;
}

/** Removes bookings together with the followers that rest on them. */
export function lift(state: State, indices: readonly number[]): number[] {
  const lifted = [...withFollowers(state, indices)];
  for (const i of lifted) state.set(i, null);
  return lifted;
}

/** The predecessor whose gapMax closes first, if any. */
function tightest(state: State, job: Job): { job: number; gapMax: number } | null {
  let best: { job: number; gapMax: number } | null = null;
  let closes = Number.POSITIVE_INFINITY;
  for (const a of job.after) {
    const limit = state.placed[a.job]!.end + a.gapMax;
    if (limit < closes) {
      closes = limit;
      best = a;
    }
  }
  return best;
}

/**
 * Places a booking as early as it can go. Where a gapMax stands in the way the predecessor is
 * pushed later, with all that already follows it, until both fit; otherwise nothing changes.
 *
 * @param from no start before this instant, ms
 */
export function insert(
  state: State,
  job: Job,
  from = Number.NEGATIVE_INFINITY,
  taste: Taste = LEAST_LOADED,
  depth = 0,
  patience: Patience = { pushes: MAX_PUSHES },
): boolean {
  if (state.hopeless.has(job.index)) return false;
  const bounds = startBounds(state, job);
  if (!bounds) return false;
  const place = earliestPlace(state, job, { ...bounds, from: Math.max(bounds.from, from) }, taste);
  if (place) {
    state.set(job.index, place);
    return true;
  }
  const held = job.followers.some((f) => state.placed[f]);
  if (held || depth >= MAX_DEPTH || allowedRigs(state, job).length === 0) return false;
  return pushPredecessors(state, job, from, taste, depth, patience);
}

function pushPredecessors(
  state: State,
  job: Job,
  from: number,
  taste: Taste,
  depth: number,
  patience: Patience,
): boolean {
  const { jobs, notAfter } = state.problem;
  const mark = state.mark();
  while (patience.pushes-- > 0) {
    const bounds = startBounds(state, job);
    if (!bounds) break;
    const start = Math.max(bounds.from, from);
    const place = earliestPlace(state, job, { from: start, to: bounds.to }, taste);
    if (place) {
      state.set(job.index, place);
      return true;
    }
    const limit = tightest(state, job);
    const open = earliestPlace(state, job, { from: start, to: notAfter - job.duration }, taste);
    if (!limit || !open) break;
    const before = jobs[limit.job]!;
    const old = state.placed[before.index]!;
    const later = Math.max(open.start - limit.gapMax - before.longest, old.start + GRID);
    if (!pushLater(state, before, later, taste, depth, patience)) break;
  }
  state.rollback(mark);
  return false;
}

/** Moves a booking to `later` or after and sets what followed it again. False: all left undone. */
function pushLater(
  state: State,
  job: Job,
  later: number,
  taste: Taste,
  depth: number,
  patience: Patience,
): boolean {
  const { jobs, order } = state.problem;
  const mark = state.mark();
  const family = withFollowers(state, [job.index]);
  const stood = order.filter((i) => family.has(i) && i !== job.index && state.placed[i]);
  for (const i of [job.index, ...stood]) state.set(i, null);
  const fine =
    insert(state, job, later, taste, depth + 1, patience) &&
    stood.every((i) => insert(state, jobs[i]!, undefined, taste, depth + 1, patience));
  if (!fine) state.rollback(mark);
  return fine;
}

/** Places bookings in the order given, each only once its predecessors have had their turn. */
export function insertAll(
  state: State,
  indices: readonly number[],
  taste: Taste = LEAST_LOADED,
  delays?: ReadonlyMap<number, number>,
): void {
  const { jobs } = state.problem;
  const waiting = new Set(indices);
  const visit = (i: number): void => {
    if (!waiting.delete(i)) return;
    for (const a of jobs[i]!.after) visit(a.job);
    if (!state.placed[i]) insert(state, jobs[i]!, delays?.get(i), taste);
  };
  for (const i of indices) visit(i);
}
