import type { Job } from './problem';
import { LEAST_LOADED, nextStaffed, staffVisits, type Taste } from './staff';
import type { Placed, State } from './state';
import { DAY, GRID, HOUR } from './time';

/** Between which instants a booking may start and, where followers stand, must end. */
export type Bounds = { from: number; to: number; endFrom?: number; endTo?: number };

/** Bounds by the plan's span, the predecessors and the followers that stand; null: one is missing. */
export function startBounds(state: State, job: Job): Bounds | null {
  const { notBefore, notAfter } = state.problem;
  let from = notBefore;
  let to = notAfter - job.duration;
  for (const a of job.after) {
    const before = state.placed[a.job];
    if (!before) return null;
    from = Math.max(from, before.end + a.gapMin);
    to = Math.min(to, before.end + a.gapMax);
  }
  const ends = endBounds(state, job);
  return {
    from: Math.max(from, ends.endFrom - job.longest),
    to: Math.min(to, ends.endTo - job.duration),
    ...ends,
  };
}

function endBounds(state: State, job: Job): { endFrom: number; endTo: number } {
  let endFrom = Number.NEGATIVE_INFINITY;
  let endTo = state.problem.notAfter;
  for (const f of job.followers) {
    const next = state.placed[f];
    if (!next) continue;
    for (const a of state.problem.jobs[f]!.after) {
      if (a.job !== job.index) continue;
      endFrom = Math.max(endFrom, next.start - a.gapMax);
      endTo = Math.min(endTo, next.start - a.gapMin);
    }
  }
  return { endFrom, endTo };
}

/** The rigs that a booking may use: that of its group once one of the group stands. */
export function allowedRigs(state: State, job: Job): number[] {
  if (job.group.length === 1) return job.rigs;
  const { jobs } = state.problem;
  for (const member of job.group) {
    const at = member === job.index ? null : state.placed[member];
    if (at) return job.rigs.includes(at.rig) ? [at.rig] : [];
  }
  const shared = job.rigs.filter((r) => job.group.every((m) => jobs[m]!.rigs.includes(r)));
  return shared.length > 0 ? shared : job.rigs;
}

/** Misses in one plan after which the search goes in large steps, so that its time stays bounded. */
const TIRED = 20_000;

export function snapUp(t: number, notBefore: number): number {
  return notBefore + Math.ceil((t - notBefore) / GRID) * GRID;
}

/** Where visits of one booking get in each other's way no jump is exact: small steps, then larger. */
function stride(misses: number, total: number): number {
  if (total > TIRED) return total > 4 * TIRED ? 6 * HOUR : HOUR;
  if (misses < DAY / GRID) return GRID;
  return misses < 1000 ? 3 * GRID : HOUR;
}

/** The earliest start ≥ t at which some allowed rig is free for the shortest stay. */
function nextRig(state: State, job: Job, rigs: readonly number[], t: number): number {
  let best = Number.POSITIVE_INFINITY;
  for (const r of rigs) {
    const at = state.problem.rigs[r]!.nextFree(t, job.duration);
    if (at === t) return t;
    best = Math.min(best, at);
  }
  return best;
}

/** The earliest start at which the visit that is worst off could be staffed; `t` when all can. */
function nextVisits(state: State, job: Job, t: number): number {
  const { notAfter } = state.problem;
  for (const visit of job.visits) {
    const first = t + visit.at;
    const s = nextStaffed(state, job, visit, first, notAfter - visit.duration);
    if (s > first + visit.late) return s - visit.at - visit.late;
  }
  return t;
}

function chooseRig(
  state: State,
  rigs: readonly number[],
  start: number,
  end: number,
  taste: Taste,
): number | null {
  let best: { rig: number; idle: number } | null = null;
  for (const r of rigs) {
    const book = state.problem.rigs[r]!;
    if (book.nextFree(start, end - start) !== start) continue;
    const idle = book.idleBefore(start) + taste.noise(r);
    if (!best || idle < best.idle) best = { rig: r, idle };
  }
  return best?.rig ?? null;
}

/**
 * The earliest feasible place of a booking with everything else as it stands, or null. Moves from
 * one candidate start to the next at which a rig is free and each visit alone can be staffed.
 */
export function earliestPlace(
  state: State,
  job: Job,
  bounds: Bounds,
  taste: Taste = LEAST_LOADED,
): Placed | null {
  const { notBefore, notAfter } = state.problem;
  const { endFrom = notBefore, endTo = notAfter } = bounds;
  const rigs = allowedRigs(state, job);
  let t = snapUp(bounds.from, notBefore);
  let misses = 0;
  while (t <= bounds.to) {
    const rigAt = snapUp(nextRig(state, job, rigs, t), notBefore);
    if (rigAt > t) {
      t = rigAt;
      continue;
    }
    const staffed = snapUp(nextVisits(state, job, t), notBefore);
    if (staffed > t) {
      t = staffed;
      continue;
    }
    const attendance = staffVisits(state, job, t, endTo, taste);
    if (attendance) {
      const end = Math.max(t + job.duration, ...attendance.map((a) => a.to));
      const rig = end < endFrom ? null : chooseRig(state, rigs, t, end, taste);
      if (rig !== null) return { start: t, end, rig, attendance };
    }
    t += stride(misses++, state.misses++);
  }
  return null;
}
