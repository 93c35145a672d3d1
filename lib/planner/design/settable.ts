import type { DesignRequest } from '@/lib/contracts';

/**
 * Doses that rows of the series may take: all of [low, high], or the sorted `grid` doses in it.
 * `path` holds the settable doses, in range or not, that may serve as rungs; null: any dose.
 */
export type Settable = {
  low: number;
  high: number;
  grid: number[] | null;
  path: number[] | null;
};

export type SettableRequest = Pick<DesignRequest, 'range' | 'order' | 'limits' | 'oscillates'>;

/** Whether a rise from one dose to another keeps the largest step, but for rounding. */
export function withinStep(from: number, to: number, largest: number): boolean {
  const rounding = 4 * Number.EPSILON * Math.max(Math.abs(from), Math.abs(to));
  return to - from <= largest * (1 + 1e-12) + rounding;
}

/** The dose in force before the series: as stated, or the steady end of the range. */
export function startOf(request: SettableRequest): number {
  const [lo, hi] = request.range;
  return request.limits?.start ?? (request.oscillates === 'below' ? hi : lo);
}

/** The settable doses that a chain of allowed rises leads to from `start`; falls are free. */
function reachable(path: number[], start: number, largest: number): number[] {
  let at = start;
  for (const dose of path) {
    if (dose <= at) continue;
    if (!withinStep(at, dose, largest)) break;
    at = dose;
  }
  return path.filter((dose) => dose <= at);
}

function splitAtGaps(path: number[], largest: number): number[][] {
  const islands: number[][] = [];
  for (const dose of path) {
    const island = islands.at(-1);
    const last = island?.at(-1);
    if (island && last !== undefined && withinStep(last, dose, largest)) island.push(dose);
    else islands.push([dose]);
  }
  return islands;
}

/**
 * The sets of doses from which a series may take its rows, within range, ceiling and grid. More
 * than one only where a rising series cannot cross a gap of the grid wider than the largest step:
 * then it has to stay within one of them. Empty when nothing can be set.
 */
export function settableSets(request: SettableRequest): Settable[] {
  const { limits, order } = request;
  const low = request.range[0];
  const high = Math.min(request.range[1], limits?.ceiling ?? Infinity);
  if (low > high) return [];
  if (!limits?.grid) return [{ low, high, grid: null, path: null }];
  const ceiling = limits.ceiling ?? Infinity;
  const all = [...new Set(limits.grid)].filter((d) => d <= ceiling).sort((a, b) => a - b);
  const largest = order === 'randomised' ? undefined : limits.largestStep;
  const path = largest === undefined ? all : reachable(all, startOf(request), largest);
  const islands =
    largest === undefined || order === 'descending' ? [path] : splitAtGaps(path, largest);
  return islands.flatMap((island) => {
    const grid = island.filter((d) => d >= low && d <= high);
    if (grid.length === 0) return [];
    return [{ low: grid[0]!, high: grid.at(-1)!, grid, path: island }];
  });
}

/** Doses that no onset level or anchor may repeat, and how near to one counts as repeating it. */
export type Avoid = { doses: readonly number[]; near: number };

const LATTICE = 800;

/**
 * The set without the doses to avoid; rungs may still pass them. Where any dose may be set, a fine
 * lattice stands for the set, with places just clear of each avoided dose. Null: nothing is left.
 */
export function clearOf(set: Settable, avoid: Avoid): Settable | null {
  if (avoid.doses.length === 0) return set;
  const { low, high } = set;
  const even = Array.from({ length: LATTICE + 1 }, (_, i) => low + ((high - low) * i) / LATTICE);
  const beside = avoid.doses.flatMap((d) => [d - avoid.near, d + avoid.near]);
  const all = set.grid ?? [...even, ...beside, high].sort((a, b) => a - b);
  const grid = [...new Set(all)].filter(
    (d) =>
      d >= low && d <= high && avoid.doses.every((a) => Math.abs(d - a) >= avoid.near * (1 - 1e-9)),
  );
  if (grid.length === 0) return null;
  return { ...set, grid, low: grid[0]!, high: grid.at(-1)! };
}
