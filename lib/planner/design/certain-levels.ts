import type { Atoms, Prior } from './prior';
import { pooled } from './prior';
import { bestThresholds, mostLevels, normalThresholds } from './quantiser';
import type { Settable } from './settable';

/** Weight of the even prior that places the levels for which the stated prior has no use. */
const EVEN_WEIGHT = 1e-6;
const EVEN_POINTS = 600;
const CELL_MASS = 1e-10;
const CANDIDATES = 3000;

/** Prior atoms with a thin even layer over the settable doses. */
function withEvenLayer(prior: Prior, set: Settable): Prior {
  const n = EVEN_POINTS;
  const width = (set.high - set.low) / n;
  const list: [number, number][] = Array.from(prior.atoms.x, (x, i) => [x, prior.atoms.w[i]!]);
  for (let i = 0; i < n; i += 1) list.push([set.low + (i + 0.5) * width, EVEN_WEIGHT / n]);
  list.sort((a, b) => a[0] - b[0]);
  const atoms: Atoms = {
    x: Float64Array.from(list, (a) => a[0]),
    w: Float64Array.from(list, (a) => a[1]),
    v: new Float64Array(list.length),
  };
  return { ...prior, normal: false, atoms };
}

/** Where a threshold may stand between neighbouring atoms, once for each gap within the set. */
export function gapsWithin(atoms: Atoms, set: Settable): number[] {
  const found: number[] = [];
  for (let i = 0; i + 1 < atoms.x.length; i += 1) {
    const from = Math.max(atoms.x[i]!, set.low);
    const to = Math.min(atoms.x[i + 1]!, set.high);
    if (atoms.x[i + 1]! > set.low && atoms.x[i]! <= set.high && from <= to) {
      found.push(from + (to - from) / 2);
    }
  }
  return found;
}

/** Doses to choose from where any may be set and neighbours must keep `apart`. */
function spacedCandidates(prior: Prior, set: Settable, apart: number): number[] {
  const list = gapsWithin(pooled(prior.atoms, CANDIDATES / 2), set);
  const span = set.high - set.low;
  for (let i = 0; i <= 300; i += 1) list.push(Math.min(set.high, set.low + (span * i) / 300));
  const whole = Math.min(CANDIDATES, Math.floor((span / apart) * (1 + 1e-12)));
  for (let i = 0; i <= whole; i += 1) {
    list.push(Math.min(set.high, set.low + i * apart), Math.max(set.low, set.high - i * apart));
  }
  return [...new Set(list)].sort((a, b) => a - b);
}

/** Moves each threshold, within its gap, halfway between the centroids on either side (Lloyd). */
function centred(prior: Prior, set: Settable, thresholds: number[]): number[] {
  const { x, w } = prior.atoms;
  const centroids: number[] = [];
  const gaps: [number, number][] = [];
  let j = 0;
  for (const t of [...thresholds, Infinity]) {
    let [mass, moment] = [0, 0];
    for (; j < x.length && x[j]! <= t; j += 1) {
      mass += w[j]!;
      moment += w[j]! * x[j]!;
    }
    centroids.push(moment / mass);
    gaps.push([x[j - 1] ?? -Infinity, x[j] ?? Infinity]);
  }
  return thresholds.map((t, i) => {
    const middle = (centroids[i]! + centroids[i + 1]!) / 2;
    const wanted = Math.min(set.high, Math.max(set.low, middle));
    return wanted >= gaps[i]![0] && wanted < gaps[i]![1] ? wanted : t;
  });
}

function allUseful(prior: Prior, thresholds: number[]): boolean {
  const { x, w } = prior.atoms;
  let j = 0;
  for (const t of [...thresholds, Infinity]) {
    let mass = 0;
    for (; j < x.length && x[j]! <= t; j += 1) mass += w[j]!;
    if (mass < CELL_MASS) return false;
  }
  return true;
}

const keepsApart = (levels: number[], apart: number) =>
  levels.every((d, i) => i === 0 || d - levels[i - 1]! >= apart * (1 - 1e-9));

/** How many levels the set can hold, `apart` from one another; at most `wanted`. */
export function roomFor(set: Settable, wanted: number, apart: number): number {
  if (set.grid) return Math.min(wanted, mostLevels(set.grid, apart));
  if (set.low === set.high) return Math.min(wanted, 1);
  if (apart === 0) return wanted;
  return Math.min(wanted, Math.floor(((set.high - set.low) / apart) * (1 + 1e-9)) + 1);
}

function choose(prior: Prior, set: Settable, k: number, apart: number): number[] | null {
  if (set.grid) return bestThresholds(prior, set.grid, k, apart);
  if (apart > 0) return bestThresholds(prior, spacedCandidates(prior, set, apart), k, apart);
  const found = bestThresholds(prior, gapsWithin(prior.atoms, set), k, 0);
  return found && centred(prior, set, found);
}

/**
 * The best `k` doses of the set for verdicts that never err (k ≤ `roomFor`): thresholds of the
 * k + 1 cells that leave the least variance. Levels that the prior has no use for are spread over
 * what is left of the set.
 */
export function certainLevels(prior: Prior, set: Settable, k: number, apart: number): number[] {
  if (k === 0) return [];
  if (!set.grid && set.low === set.high) return [set.low];
  if (prior.normal && !set.grid) {
    const scaled = (d: number) => (d - prior.mean) / prior.sd;
    const free = normalThresholds(k, scaled(set.low), scaled(set.high));
    const levels = free?.map((z) => prior.mean + prior.sd * z);
    const inside = levels?.map((d) => Math.min(set.high, Math.max(set.low, d)));
    if (inside && keepsApart(inside, apart) && allUseful(prior, inside)) return inside;
  }
  const found = choose(prior, set, k, apart);
  if (found && allUseful(prior, found)) return found;
  return choose(withEvenLayer(prior, set), set, k, apart) ?? found ?? [];
}
