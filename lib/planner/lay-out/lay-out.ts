import type { LayOutAnswer, LayOutRequest } from '../../contracts/lay-out';
import { balance } from './balance';
import { construct } from './construct';
import { improve } from './improve';
import { type Problem, readProblem } from './problem';
import { seededRandom } from './random';
import { diagnosis } from './reasons';
import { type Placed, State } from './state';
import { toIso } from './time';

function writePlacement(problem: Problem, index: number, at: Placed) {
  const iso = (ms: number) => toIso(ms, problem.zone);
  return {
    booking: problem.jobs[index]!.id,
    start: iso(at.start),
    end: iso(at.end),
    rig: problem.rigs[at.rig]!.id,
    attendance: at.attendance.flatMap((a) =>
      a.people.map((p) => ({ person: problem.people[p]!.id, from: iso(a.from), to: iso(a.to) })),
    ),
  };
}

/**
 * Lays bookings out on rigs and people. Greedy plans in several orders, then seeded improvement;
 * every plan it passes through keeps all hard rules, so the answer does too.
 *
 * Where the contract leaves room it takes the stricter reading: a rig with `open` hours holds a
 * booking only if the whole stay lies in one open stretch; rest runs from the end of an attendance
 * to the start of any that begins on a later local date; attendances of one round each count in
 * full towards the daily maximum and the load; time busy elsewhere counts towards rest and daily
 * maximum, not the load. Attendances come in the order of `attended`, times in the lab's zone.
 *
 * @returns `cost`: bookings unplaced; Σ weight × minutes from `notBefore` to the end; population
 *   variance of the minutes attended per person
 * @throws EngineError `invalid-request` for unknown ids, cycles, hours or zones that cannot be read
 */
export function layOut(request: LayOutRequest): LayOutAnswer {
  const problem = readProblem(request);
  const state = new State(problem);
  const built = construct(state);
  const better = improve(state, built, request.effort, seededRandom(request.seed));
  const plan = balance(state, better);
  state.restore(plan.placed);
  const indices = problem.jobs.map((j) => j.index);
  const reason = diagnosis(request, state);
  const ends = plan.placed.flatMap((p) => (p ? [p.end] : []));
  return {
    placements: indices.flatMap((i) => {
      const at = plan.placed[i];
      return at ? [writePlacement(problem, i, at)] : [];
    }),
    unplaced: indices
      .filter((i) => !plan.placed[i])
      .map((i) => ({ booking: problem.jobs[i]!.id, reason: reason(i) })),
    finish:
      ends.length === 0
        ? null
        : toIso(
            ends.reduce((a, b) => Math.max(a, b)),
            problem.zone,
          ),
    cost: [...plan.cost],
  };
}
