import type { Job, Visit } from './problem';
import type { Attendance, State } from './state';
import { GRID } from './time';

/** How the search breaks ties; the defaults take the least loaded person. */
export type Taste = {
  /** Added to the load of a person, or to the idle time of a rig, before comparing; ms. */
  noise: (index: number) => number;
  /** Whether whoever is there for a round already does the sister vessel as well. */
  keepRounds: boolean;
  /** Whether a visit that may begin late is to try its latest moment first. */
  dawdle: () => boolean;
};
export const LEAST_LOADED: Taste = { noise: () => 0, keepRounds: true, dawdle: () => false };

const TRIES = 40;
const COMBINATIONS = 8;
const LATER = 4;

/**
 * The earliest moment in [t, limit] at which enough able people can attend the visit together,
 * people already promised to it (`taken`) counted as they stand. Infinity when there is none.
 */
export function nextStaffed(
  state: State,
  job: Job,
  visit: Visit,
  t: number,
  limit: number,
): number {
  const { people } = state.problem;
  let s = t;
  while (s <= limit) {
    const times: number[] = [];
    for (const p of job.able) {
      state.work++;
      const at = people[p]!.nextFree(s, visit.duration, visit.round, limit);
      if (at === s && visit.people === 1) return s;
      if (at !== Number.POSITIVE_INFINITY) times.push(at);
    }
    if (times.length < visit.people) return Number.POSITIVE_INFINITY;
    times.sort((a, b) => a - b);
    const next = times[visit.people - 1]!;
    if (next === s) return s;
    s = next;
  }
  return Number.POSITIVE_INFINITY;
}

type Choice = { people: number[]; from: number };

function ranked(state: State, visit: Visit, from: number, able: number[], taste: Taste): number[] {
  const to = from + visit.duration;
  const key = (p: number) => {
    const book = state.problem.people[p]!;
    const shared = taste.keepRounds && book.sharesRound(from, to, visit.round) ? 0 : 1;
    return { p, shared, load: book.load + taste.noise(p) };
  };
  return able
    .map(key)
    .sort((a, b) => a.shared - b.shared || a.load - b.load || a.p - b.p)
    .map((k) => k.p);
}

/** The first few ways to pick `n` of the ranked people, best ranked first. */
function combinations(people: readonly number[], n: number): number[][] {
  const out: number[][] = [];
  const pick = (from: number, chosen: number[]) => {
    if (out.length >= COMBINATIONS) return;
    if (chosen.length === n) {
      out.push(chosen);
      return;
    }
    for (let i = from; i <= people.length - (n - chosen.length); i++) {
      pick(i + 1, [...chosen, people[i]!]);
    }
  };
  pick(0, []);
  return out;
}

/** A few moments of the leeway, on the grid of starts, for visits that must make room. */
function laterMoments(visit: Visit, first: number): number[] {
  const stride = Math.max(GRID, Math.ceil(visit.late / GRID / LATER) * GRID);
  const out: number[] = [];
  for (let by = stride; by <= visit.late; by += stride) out.push(first + by);
  return out;
}

/** Ways to staff one visit, likeliest first; worked out only as far as they are asked for. */
function* choices(
  state: State,
  job: Job,
  visit: Visit,
  start: number,
  taste: Taste,
): Generator<Choice> {
  const first = start + visit.at;
  const last = first + visit.late;
  const { people } = state.problem;
  const when = job.able.map((p) => {
    state.work++;
    return people[p]!.nextFree(first, visit.duration, visit.round, last);
  });
  // Two people may be free together only at a moment that is neither one's first.
  const joint = visit.people > 1 ? [nextStaffed(state, job, visit, first, last)] : [];
  const soon = [...joint, ...when].filter(Number.isFinite);
  const moments = [...new Set([...soon, ...laterMoments(visit, first)])].sort((a, b) => a - b);
  if (visit.late > 0 && taste.dawdle()) moments.reverse();
  for (const from of moments) {
    state.work += job.able.length;
    const free = job.able.filter(
      (p) => people[p]!.nextFree(from, visit.duration, visit.round, from) === from,
    );
    if (free.length < visit.people) continue;
    for (const set of combinations(ranked(state, visit, from, free, taste), visit.people)) {
      yield { people: set, from };
    }
  }
}

/**
 * People and moments for every visit of a booking that starts at `start`, or null. Visits are
 * taken from the least leeway to the most with a bounded backtrack, because one visit uses up rest, minutes and
 * presence that the next one needs.
 */
export function staffVisits(
  state: State,
  job: Job,
  start: number,
  latestEnd: number,
  taste: Taste,
): Attendance[] | null {
  const { people } = state.problem;
  const done: Attendance[] = [];
  let tries = 0;
  const descend = (k: number): boolean => {
    const visit = job.visits[k];
    if (!visit) return true;
    for (const choice of choices(state, job, visit, start, taste)) {
      const to = choice.from + visit.duration;
      if (to > latestEnd) continue;
      if (tries++ >= TRIES + job.visits.length) return false;
      for (const p of choice.people) people[p]!.add(choice.from, to, visit.round);
      const fine = descend(k + 1);
      for (const p of choice.people) people[p]!.remove(choice.from, to, visit.round);
      if (!fine) continue;
      done.push({ visit: visit.index, people: choice.people, from: choice.from, to });
      return true;
    }
    return false;
  };
  return descend(0) ? done.sort((a, b) => a.visit - b.visit) : null;
}
