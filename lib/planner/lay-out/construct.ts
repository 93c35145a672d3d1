import { insertAll } from './insert';
import type { Job, Problem } from './problem';
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

/** The best of the greedy plans; the state is left holding it. */
export function construct(state: State): Plan {
  let best: Plan | null = null;
  const empty = state.mark();
  for (const order of greedyOrders(state.problem)) {
    insertAll(state, order);
    const plan = snapshot(state);
    if (!best || compareCost(plan.cost, best.cost) < 0) best = plan;
    state.rollback(empty);
  }
  const plan = best ?? snapshot(state);
  state.restore(plan.placed);
  return plan;
}
