import { gapsWithin } from './certain-levels';
import type { Reading } from './posterior';
import { blurredVariance, SEARCH_EFFORT } from './posterior';
import type { Atoms, Prior } from './prior';
import { pooled } from './prior';
import type { Settable } from './settable';

/** Enough places that the onset stays resolved after all verdicts are in. */
const searchAtoms = (verdicts: number) => Math.min(200, Math.max(64, 8 * Math.sqrt(verdicts)));
const LATTICE = 1500;
/** Work allowed to one search, in evaluations of one design. */
const EVALUATIONS = 2400;
const EVALUATIONS_BY_POINTS = 60;

/** The doses that the search moves over: the grid, or a lattice of 1/125 of the widened prior. */
function latticeOf(prior: Prior, set: Settable, blur: number, extra: readonly number[]): number[] {
  if (set.grid) return set.grid;
  const reach = 6 * Math.hypot(prior.sd, blur);
  const low = Math.max(set.low, Math.min(prior.mean - reach, set.high));
  const high = Math.min(set.high, Math.max(prior.mean + reach, set.low));
  const list = [set.low, set.high, ...extra.filter((d) => d >= set.low && d <= set.high)];
  for (let i = 0; i <= LATTICE; i += 1) list.push(low + ((high - low) * i) / LATTICE);
  if (low >= high) list.push(...gapsWithin(prior.atoms, set));
  return [...new Set(list)].filter((d) => d <= set.high).sort((a, b) => a - b);
}

function nearestIndex(lattice: number[], dose: number): number {
  let [low, high] = [0, lattice.length - 1];
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (lattice[middle]! <= dose) low = middle;
    else high = middle;
  }
  return dose - lattice[low]! <= lattice[high]! - dose ? low : high;
}

/** Nearest allowed indices for wished doses, neighbours kept apart; null when it cannot be. */
function snapped(lattice: number[], doses: readonly number[], apart: number): number[] | null {
  const at = doses.map((d) => nearestIndex(lattice, d));
  const far = (i: number, j: number) => i !== j && lattice[j]! - lattice[i]! >= apart * (1 - 1e-9);
  for (let i = 1; i < at.length; i += 1) {
    while (at[i]! < lattice.length && (at[i]! <= at[i - 1]! || !far(at[i - 1]!, at[i]!)))
      at[i]! += 1;
  }
  let limit = lattice.length - 1;
  for (let i = at.length - 1; i >= 0; i -= 1) {
    at[i] = Math.min(at[i]!, limit);
    limit = at[i]!;
    while (i > 0 && limit >= 0 && !far(limit, at[i]!)) limit -= 1;
    if (limit < 0) return null;
  }
  return at;
}

/** Candidate moves of step h: each level, all together, and all about their middle. */
function movesOf(at: readonly number[], h: number, together: boolean): number[][] {
  const moves: number[][] = [];
  for (const sign of [-1, 1]) {
    for (let i = 0; i < at.length && !together; i += 1) {
      moves.push(at.map((x, j) => (j === i ? x + sign * h : x)));
    }
    if (at.length === 1 && !together) continue;
    moves.push(at.map((x) => x + sign * h));
    const middle = (at.length - 1) / 2;
    moves.push(at.map((x, j) => x + Math.round((sign * h * (j - middle)) / Math.max(1, middle))));
  }
  return moves;
}

type Search = {
  lattice: number[];
  apart: number;
  /** Levels move as one only: where the cost is sampled, single moves would follow its noise. */
  together: boolean;
  cost: (levels: number[]) => number;
};
type Found = { at: number[]; cost: number };

function permitted(search: Search, at: readonly number[]): boolean {
  const { lattice, apart } = search;
  return at.every((x, i) => {
    if (x < 0 || x >= lattice.length) return false;
    if (i === 0) return true;
    return x > at[i - 1]! && lattice[x]! - lattice[at[i - 1]!]! >= apart * (1 - 1e-9);
  });
}

/** Pattern search (Hooke & Jeeves 1961, J ACM 8:212): steps halve until one lattice place. */
function descend(search: Search, start: Found, allowance: number): Found {
  let best = start;
  let h = Math.max(1, Math.round(search.lattice.length / 24));
  let left = allowance;
  while (left > 0) {
    let improved = false;
    const count = movesOf(best.at, h, search.together).length;
    for (let i = 0; i < count && left > 0; i += 1) {
      const at = movesOf(best.at, h, search.together)[i]!;
      if (!permitted(search, at)) continue;
      left -= 1;
      const cost = search.cost(at.map((x) => search.lattice[x]!));
      if (cost < best.cost * (1 - 1e-9)) {
        best = { at, cost };
        improved = true;
      }
    }
    if (improved) continue;
    if (h === 1) break;
    h = h >> 1;
  }
  return best;
}

/** Starting series: the certain one, it drawn together and apart, evenly spread, and bunched. */
function startsOf(prior: Prior, certain: readonly number[], equal: readonly number[]): number[][] {
  const k = certain.length;
  const middle = certain.reduce((s, d) => s + d, 0) / k;
  const about = (f: number) => certain.map((d) => middle + f * (d - middle));
  const bunched = certain.map((_, i) => prior.mean + 0.02 * prior.sd * (i - (k - 1) / 2));
  return [[...certain], about(0.75), about(0.5), about(1.3), bunched, [...equal]];
}

/**
 * The `certain.length` doses of least expected posterior variance where verdicts are blurred:
 * pattern search from several starts over a pooled prior. `apart`: least distance of neighbours.
 */
export function blurredLevels(
  prior: Prior,
  set: Settable,
  reading: Reading,
  certain: readonly number[],
  equal: readonly number[],
  apart: number,
): number[] {
  const atoms: Atoms = pooled(prior.atoms, searchAtoms(certain.length * reading.replicates));
  const lattice = latticeOf(prior, set, reading.blur, [...certain, ...equal]);
  const starts = startsOf(prior, certain, equal).flatMap((doses) => {
    const at = doses.length === certain.length ? snapped(lattice, doses, apart) : null;
    return at ? [at] : [];
  });
  if (starts.length === 0) return [...certain];
  const doses = (at: number[]) => at.map((x) => lattice[x]!);
  const byPoints = starts.some(
    (at) => blurredVariance(atoms, doses(at), reading, SEARCH_EFFORT).byPoints,
  );
  const cost = (levels: number[]) =>
    blurredVariance(atoms, levels, reading, SEARCH_EFFORT, byPoints).variance;
  const search: Search = { lattice, apart, together: byPoints, cost };
  const ranked = starts
    .filter((at) => permitted(search, at))
    .map((at) => ({ at, cost: cost(doses(at)) }))
    .sort((a, b) => a.cost - b.cost)
    .slice(0, 3);
  const each = (byPoints ? EVALUATIONS_BY_POINTS : EVALUATIONS) / 3;
  const found = ranked.map((start) => descend(search, start, each));
  const best = found.reduce<Found | null>((a, b) => (a && a.cost <= b.cost ? a : b), null);
  return best ? doses(best.at) : [...certain];
}
