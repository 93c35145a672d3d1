import { type Plan, snapshot } from './construct';
import { insertAll, lift } from './insert';
import { type Random, shuffled } from './random';
import type { Taste } from './staff';
import { type Cost, compareCost, type State } from './state';
import { DAY, GRID, HOUR } from './time';

/** Work, in looks at a person's calendar, that all steps together may take on average. */
const WORK_PER_STEP = 1200;
const LARGEST = 12;

/** How strongly two bookings compete: the smaller, the closer. */
function distance(state: State, a: number, b: number, random: Random): number {
  const { jobs, notBefore } = state.problem;
  const one = jobs[a]!;
  const two = jobs[b]!;
  const startA = state.placed[a]?.start ?? notBefore;
  const startB = state.placed[b]?.start ?? notBefore;
  const apart = Math.abs(startA - startB) / DAY;
  const rigs = one.rigs.some((r) => two.rigs.includes(r)) ? 0 : 2;
  const tied = one.group === two.group || one.after.some((x) => x.job === b) ? -2 : 0;
  return apart + rigs + tied + 3 * random();
}

/** Bookings to take out in one step: one at random, or an unplaced one, and its competitors. */
function chooseVictims(state: State, random: Random): number[] {
  const { hopeless } = state;
  const jobs = state.problem.jobs.filter((j) => !hopeless.has(j.index));
  const n = jobs.length;
  const unplaced = jobs.map((j) => j.index).filter((i) => !state.placed[i]);
  const seed =
    unplaced.length > 0 && random() < 0.5
      ? unplaced[Math.floor(random() * unplaced.length)]!
      : jobs[Math.floor(random() * n)]!.index;
  const most = Math.min(n, Math.max(LARGEST / 2, Math.min(LARGEST, Math.ceil(n / 5))));
  const size = 1 + Math.floor(random() * most);
  const near = jobs
    .map((j) => ({
      i: j.index,
      d: j.index === seed ? -10 : distance(state, seed, j.index, random),
    }))
    .sort((x, y) => x.d - y.d || x.i - y.i)
    .slice(0, size)
    .map((x) => x.i);
  // A group can change its rig only when all of it is lifted.
  if (random() < 0.3) near.push(...state.problem.jobs[seed]!.group);
  return near;
}

function chooseOrder(state: State, lifted: readonly number[], random: Random): number[] {
  const { jobs } = state.problem;
  const mixed = shuffled(lifted, random);
  const kind = random();
  if (kind < 0.5) return mixed;
  if (kind < 0.7) {
    const ratio = (i: number) => jobs[i]!.duration / Math.max(1e-9, jobs[i]!.weight);
    return mixed.sort((a, b) => ratio(a) - ratio(b));
  }
  if (kind < 0.85) return mixed.sort((a, b) => jobs[b]!.duration - jobs[a]!.duration);
  return mixed.sort((a, b) => jobs[a]!.able.length - jobs[b]!.able.length);
}

function chooseTaste(state: State, random: Random): Taste {
  const strength = random() < 0.4 ? 4 * HOUR : 0;
  const size = Math.max(state.problem.people.length, state.problem.rigs.length);
  const noise = Array.from({ length: size }, () => random() * strength);
  const keepRounds = random() < 0.75;
  const late = random() < 0.15 ? 0.5 : 0;
  return { noise: (p) => noise[p]!, keepRounds, dawdle: () => late > 0 && random() < late };
}

/** Now and then a booking is held back: with gapMax the earliest start is not always the best. */
function chooseDelays(state: State, order: readonly number[], random: Random) {
  const delays = new Map<number, number>();
  if (random() > 0.15 || order.length === 0) return delays;
  const held = order[Math.floor(random() * order.length)]!;
  const steps = Math.floor(2 ** (random() * 9));
  delays.set(held, (state.placed[held]?.start ?? state.problem.notBefore) + steps * GRID);
  return delays;
}

/** Sets bookings again while their followers stand; followers are lifted only where that fails. */
function reseatInPlace(
  state: State,
  victims: readonly number[],
  taste: Taste,
  random: Random,
): void {
  const { jobs } = state.problem;
  for (const i of victims) state.set(i, null);
  insertAll(state, chooseOrder(state, [...new Set(victims)], random), taste);
  const orphans = victims.filter(
    (i) => !state.placed[i] && jobs[i]!.followers.some((f) => state.placed[f]),
  );
  if (orphans.length === 0) return;
  const lifted = new Set([...lift(state, orphans), ...victims.filter((i) => !state.placed[i])]);
  insertAll(state, chooseOrder(state, [...lifted], random), taste);
}

function acceptable(next: Cost, current: Cost, slack: number): boolean {
  if (compareCost(next, current) <= 0) return true;
  return next[0] === current[0] && next[1] <= current[1] * (1 + slack) + 1e-9;
}

/**
 * Large-neighbourhood search (Shaw 1998) with record-to-record acceptance (Dueck 1993): lifts a few
 * bookings that compete, sets them again in another order, keeps what is not much worse, returns
 * the best plan seen, which is never worse than `start`. Ends after `effort` steps, or sooner when
 * their total work is spent; both counts are the same on every machine.
 */
export function improve(state: State, start: Plan, effort: number, random: Random): Plan {
  let best = start;
  let current = start.cost;
  const budget = state.work + effort * WORK_PER_STEP;
  if (state.hopeless.size === state.problem.jobs.length) return best;
  for (let step = 0; step < effort && state.work < budget; step++) {
    const mark = state.mark();
    const victims = chooseVictims(state, random);
    const delays = chooseDelays(state, victims, random);
    const taste = chooseTaste(state, random);
    if (random() < 0.6) reseatInPlace(state, victims, taste, random);
    else insertAll(state, chooseOrder(state, lift(state, victims), random), taste, delays);
    const cost = state.cost();
    if (!acceptable(cost, current, 0.01 * (1 - step / effort))) {
      state.rollback(mark);
      continue;
    }
    current = cost;
    if (compareCost(cost, best.cost) < 0) best = snapshot(state);
  }
  state.restore(best.placed);
  return best;
}
