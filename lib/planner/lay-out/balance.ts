import { type Plan, snapshot } from './construct';
import { compareCost, roundOf, type State } from './state';

const MAX_ROUNDS = 4;

/** Gives one attendance to somebody with less to do, the moment kept. True when it got better. */
function handOver(state: State, index: number, k: number): boolean {
  const { jobs, people } = state.problem;
  const job = jobs[index]!;
  const at = state.placed[index]!;
  const attendance = at.attendance[k]!;
  const round = roundOf(job, attendance.visit);
  const duration = attendance.to - attendance.from;
  for (const from of attendance.people) {
    // A person who does sister vessels in one round keeps the round.
    if (round !== null) continue;
    const lighter = job.able
      .filter((p) => !attendance.people.includes(p))
      .filter((p) => people[p]!.load + duration < people[from]!.load)
      .sort((a, b) => people[a]!.load - people[b]!.load || a - b);
    for (const to of lighter) {
      const free = people[to]!.nextFree(attendance.from, duration, round, attendance.from);
      if (free !== attendance.from) continue;
      const swapped = attendance.people.map((p) => (p === from ? to : p));
      const list = at.attendance.slice();
      list[k] = { ...attendance, people: swapped };
      state.set(index, { ...at, attendance: list });
      return true;
    }
  }
  return false;
}

/** Evens out the load without touching a time; the state holds the plan that is returned. */
export function balance(state: State, plan: Plan): Plan {
  for (let round = 0; round < MAX_ROUNDS; round++) {
    let changed = false;
    state.problem.jobs.forEach((job) => {
      const visits = state.placed[job.index]?.attendance.length ?? 0;
      for (let k = 0; k < visits; k++) if (handOver(state, job.index, k)) changed = true;
    });
    if (!changed) break;
  }
  const even = snapshot(state);
  return compareCost(even.cost, plan.cost) < 0 ? even : plan;
}
