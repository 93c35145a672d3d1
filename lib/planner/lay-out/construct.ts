import { insertAll } from './insert';
import { earliestPlace } from './place';
import { type Job, joinGroups, type Problem } from './problem';
import type { Cost, Placed, State } from './state';
import { compareCost } from './state';

export type Plan = { placed: (Placed | null)[]; cost: Cost };

export function snapshot(state: State): Plan {
  return { placed: state.placed.slice(), cost: state.cost() };
}

/** Length of the longest chain of followers behind each booking, its own stay included, ms. */
function tails(problem: Problem): number[] {
  const tail = problem.jobs.map((j) => j.longest);
  for (const i of problem.order.slice().reverse()) {
    const job = problem.jobs[i]!;
    for (const f of job.followers) {
      const gap = problem.jobs[f]!.after.find((a) => a.job === i)?.gapMin ?? 0;
      tail[i] = Math.max(tail[i]!, job.longest + gap + tail[f]!);
    }
  }
  return tail;
}

/** Small where few rigs or people will do. */
function freedom(job: Job): number {
  const needed = Math.max(1, ...job.visits.map((v) => v.people));
  return job.rigs.length * (job.visits.length === 0 ? 1000 : job.able.length / needed);
}

/** Greedy orders: as asked, longest chain first, heavy and short first, least free first. */
export function greedyOrders(problem: Problem): number[][] {
  const tail = tails(problem);
  const { jobs, order } = problem;
  const by = (key: (i: number) => number) => order.slice().sort((a, b) => key(a) - key(b));
  return [
    order,
    by((i) => -tail[i]!),
    by((i) => jobs[i]!.duration / Math.max(1e-9, jobs[i]!.weight)),
    by((i) => freedom(jobs[i]!)),
    by((i) => -jobs[i]!.duration),
  ];
}

/** Further greedy orders are tried only while the work so far is below this. */
const ENOUGH_WORK = 1_500_000;

/** Marks the bookings that an empty calendar has no place for; alike ones are tried once. */
export function markHopeless(state: State): void {
  const { jobs, order, notBefore, notAfter } = state.problem;
  const known = new Map<string, boolean>();
  for (const i of order) {
    const job = jobs[i]!;
    const shape = JSON.stringify([job.duration, job.visits, job.rigs, job.able]);
    let fits = known.get(shape);
    if (fits === undefined) {
      const alone = { ...job, group: [i], followers: [], after: [] };
      const bounds = { from: notBefore, to: notAfter - job.duration };
      fits = earliestPlace(state, alone, bounds) !== null;
      known.set(shape, fits);
    }
    if (!fits || job.after.some((a) => state.hopeless.has(a.job))) state.hopeless.add(i);
  }
  joinGroups(jobs, state.hopeless);
}

/** The best of the greedy plans; the state is left holding it. */
export function construct(state: State): Plan {
  let best: Plan | null = null;
  markHopeless(state);
  const empty = state.mark();
  for (const order of greedyOrders(state.problem)) {
    insertAll(state, order);
    const plan = snapshot(state);
    if (!best || compareCost(plan.cost, best.cost) < 0) best = plan;
    state.rollback(empty);
    if (state.work > ENOUGH_WORK) break;
  }
  const plan = best ?? snapshot(state);
  state.restore(plan.placed);
  return plan;
}
