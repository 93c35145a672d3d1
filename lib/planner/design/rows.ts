import type { DesignedLevel, DesignRequest } from '@/lib/contracts';
import { EngineError } from '@/lib/contracts';
import { randomSource } from '@/lib/sim/random/generator';
import type { Placed } from './anchors';
import { withinStep } from './settable';

/** More rungs than this in one series is a mistake in the largest step, not a plan. */
const MOST_RUNGS = 2000;

export type Walk = {
  order: DesignRequest['order'];
  start: number;
  largestStep?: number;
  /** Sorted doses that may serve as rungs; null: any dose. */
  path: number[] | null;
  seed: number;
};

function tooMany(rungs: number): never {
  throw new EngineError(
    'limit-exceeded',
    `a largest step this small needs ${rungs} rungs between two levels (at most ${MOST_RUNGS}): raise it or narrow the range`,
    'limits.largestStep',
  );
}

function evenRungs(from: number, to: number, largest: number): number[] {
  let steps = Math.max(1, Math.ceil(((to - from) / largest) * (1 - 1e-12)));
  if (steps > MOST_RUNGS) tooMany(steps - 1);
  const at = (i: number) => from + ((to - from) * i) / steps;
  while (
    !Array.from({ length: steps }, (_, i) => i).every((i) => withinStep(at(i), at(i + 1), largest))
  ) {
    steps += 1;
  }
  return Array.from({ length: steps - 1 }, (_, i) => at(i + 1));
}

/** Fewest rungs from the settable doses, as even as these allow. */
function rungsOnPath(from: number, to: number, largest: number, path: number[]): number[] {
  const between = path.filter((d) => d > from && d < to);
  // deadlines[j]: the lowest dose from which `to` can still be reached in j + 1 steps.
  const deadlines: number[] = [];
  for (let goal = to; !withinStep(from, goal, largest); ) {
    const lowest = between.find((d) => d < goal && withinStep(d, goal, largest));
    if (lowest === undefined) {
      throw new EngineError(
        'internal',
        'the settable doses leave a gap wider than the largest step',
      );
    }
    deadlines.push(lowest);
    goal = lowest;
    if (deadlines.length > MOST_RUNGS) tooMany(deadlines.length);
  }
  const rungs: number[] = [];
  let at = from;
  for (let left = deadlines.length; left > 0; left -= 1) {
    const wish = at + (to - at) / (left + 1);
    const here = at;
    const open = between.filter(
      (d) => d > here && d >= deadlines[left - 1]! && withinStep(here, d, largest),
    );
    at = open.reduce((a, b) => (Math.abs(b - wish) < Math.abs(a - wish) ? b : a));
    rungs.push(at);
  }
  return rungs;
}

function rungsBetween(from: number, to: number, walk: Walk): Placed[] {
  const largest = walk.largestStep;
  if (largest === undefined || withinStep(from, to, largest)) return [];
  const doses = walk.path
    ? rungsOnPath(from, to, largest, walk.path)
    : evenRungs(from, to, largest);
  return doses.map((dose) => ({ dose, purpose: 'approach' as const }));
}

function rising(sorted: Placed[], walk: Walk): Placed[] {
  const rows: Placed[] = [];
  let at = walk.start;
  for (const level of sorted) {
    rows.push(...rungsBetween(at, level.dose, walk), level);
    at = level.dose;
  }
  return rows;
}

function shuffled(rows: Placed[], seed: number): Placed[] {
  const random = randomSource(seed);
  const out = [...rows];
  for (let i = out.length - 1; i > 0; i -= 1) {
    const j = random.below(i + 1);
    [out[i], out[j]] = [out[j]!, out[i]!];
  }
  return out;
}

function ordered(sorted: Placed[], walk: Walk): Placed[] {
  const falling = [...sorted].reverse();
  const top = falling[0];
  if (top === undefined) return [];
  if (walk.order === 'randomised') return shuffled(sorted, walk.seed);
  if (walk.order === 'descending') return [...rungsBetween(walk.start, top.dose, walk), ...falling];
  const up = rising(sorted, walk);
  return walk.order === 'ascending' ? up : [...up, ...up.slice(0, -1).reverse()];
}

/**
 * The rows in order of work, with the rungs that the largest rising step asks for, counted from
 * the dose in force at the start. `both`: all rows rising, then falling, the top once.
 */
export function rowsOf(placed: readonly Placed[], walk: Walk, replicates: number): DesignedLevel[] {
  const sorted = [...placed].sort((a, b) => a.dose - b.dose);
  return ordered(sorted, walk).map((row, i) => ({ ...row, replicates, position: i + 1 }));
}
