import type { Job } from './problem';
import { LEAST_LOADED, nextStaffed, staffVisits, type Taste } from './staff';
import type { Placed, State } from './state';
import { DAY, GRID, HOUR } from './time';

export type Bounds = { from: number; to: number };

/** Between which instants a booking may start, going by the plan's span and its predecessors. */
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
  return { from, to };
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

export function snapUp(t: number, notBefore: number): number {
  return notBefore + Math.ceil((t - notBefore) / GRID) * GRID;
}

/** Where visits of one booking get in each other's way no jump is exact: small steps, then larger. */
function stride(misses: number): number {
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
    const attendance = staffVisits(state, job, t, notAfter, taste);
    if (attendance) {
      const end = Math.max(t + job.duration, ...attendance.map((a) => a.to));
      const rig = chooseRig(state, rigs, t, end, taste);
      if (rig !== null) return { start: t, end, rig, attendance };
    }
    t += stride(misses++);
  }
  return null;
}
