import { normalMass, normalPdf } from './normal';
import type { Atoms, Prior } from './prior';

/** P, and the standardised first moment, of a standard normal between a and b. */
function normalCell(a: number, b: number): { mass: number; moment: number } {
  const pa = Number.isFinite(a) ? normalPdf(a) : 0;
  const pb = Number.isFinite(b) ? normalPdf(b) : 0;
  return { mass: normalMass(a, b), moment: pa - pb };
}

/** Mean of a standard normal between a and b; the nearer end where the cell holds no mass. */
function normalCentroid(a: number, b: number): number {
  const { mass, moment } = normalCell(a, b);
  const c = mass > 1e-280 ? moment / mass : Number.NaN;
  if (c >= a && c <= b) return c;
  return Math.abs(a) < Math.abs(b) ? a : b;
}

/** Var left of a standard normal when only its cell is known; `t` ascending thresholds in sd. */
function normalDistortion(t: readonly number[]): number {
  let gain = 0;
  for (let i = 0; i <= t.length; i += 1) {
    const { mass, moment } = normalCell(t[i - 1] ?? -Infinity, t[i] ?? Infinity);
    if (mass > 0) gain += (moment * moment) / mass;
  }
  return Math.max(0, 1 - gain);
}

/**
 * Thresholds of the best k + 1 cells of a standard normal, held within [low, high], by Lloyd's
 * fixed point (Max 1960, IRE Trans Inf Theory 6:7; Lloyd 1982, IEEE Trans Inf Theory 28:129):
 * each threshold halfway between its neighbours' centroids. The density is log-concave, so the
 * fixed point is the one optimum. Error below 1e-10 sd; null when 100,000 turns do not suffice.
 */
export function normalThresholds(k: number, low: number, high: number): number[] | null {
  const span = Math.sqrt(3) * 2;
  const [a, b] = [Math.max(low, -span), Math.min(high, span)];
  if (!(a < b)) return null;
  let t = Array.from({ length: k }, (_, i) => a + ((b - a) * (i + 1)) / (k + 1));
  for (let turn = 0; turn < 100_000; turn += 1) {
    const c = Array.from({ length: k + 1 }, (_, i) =>
      normalCentroid(t[i - 1] ?? -Infinity, t[i] ?? Infinity),
    );
    const next = t.map((_, i) => Math.min(high, Math.max(low, (c[i]! + c[i + 1]!) / 2)));
    const moved = next.reduce((m, x, i) => Math.max(m, Math.abs(x - t[i]!)), 0);
    t = next;
    if (moved < 1e-14 * (k + 1)) return t;
  }
  return null;
}

/** Variance of the onset left when every level's verdict is certain: the verdicts name a cell. */
export function certainVariance(prior: Prior, levels: readonly number[]): number {
  const sorted = [...levels].sort((p, q) => p - q);
  if (prior.normal) {
    return prior.sd ** 2 * normalDistortion(sorted.map((d) => (d - prior.mean) / prior.sd));
  }
  const { x, w } = prior.atoms;
  let gain = 0;
  let [mass, moment, cell] = [0, 0, 0];
  for (let i = 0; i < x.length; i += 1) {
    while (cell < sorted.length && x[i]! > sorted[cell]!) {
      if (mass > 0) gain += (moment * moment) / mass;
      [mass, moment] = [0, 0];
      cell += 1;
    }
    mass += w[i]!;
    moment += w[i]! * (x[i]! - prior.mean);
  }
  if (mass > 0) gain += (moment * moment) / mass;
  return Math.max(0, prior.sd ** 2 - gain);
}

/** Cumulative weight and first moment (about `centre`) of the atoms at or below each candidate. */
function cumulate(atoms: Atoms, centre: number, candidates: ArrayLike<number>) {
  const m = candidates.length;
  const mass = new Float64Array(m + 2);
  const moment = new Float64Array(m + 2);
  let [w, s, j] = [0, 0, 0];
  for (let i = 0; i < m; i += 1) {
    for (; j < atoms.x.length && atoms.x[j]! <= candidates[i]!; j += 1) {
      w += atoms.w[j]!;
      s += atoms.w[j]! * (atoms.x[j]! - centre);
    }
    mass[i + 1] = w;
    moment[i + 1] = s;
  }
  for (; j < atoms.x.length; j += 1) {
    w += atoms.w[j]!;
    s += atoms.w[j]! * (atoms.x[j]! - centre);
  }
  mass[m + 1] = w;
  moment[m + 1] = s;
  return { mass, moment };
}

/** For each candidate, the number of candidates that lie at least `apart` below it. */
function roomBelow(candidates: ArrayLike<number>, apart: number): Int32Array {
  const room = new Int32Array(candidates.length);
  const slack = 1e-9 * apart;
  let i = 0;
  for (let j = 0; j < candidates.length; j += 1) {
    while (i < j && candidates[j]! - candidates[i]! >= apart - slack) i += 1;
    room[j] = i;
  }
  return room;
}

/** The most candidates that can be chosen with `apart` between neighbours. */
export function mostLevels(candidates: ArrayLike<number>, apart: number): number {
  const room = roomBelow(candidates, apart);
  let count = 0;
  let last = -1;
  for (let j = 0; j < candidates.length; j += 1) {
    if (last >= 0 && room[j]! <= last) continue;
    count += 1;
    last = j;
  }
  return count;
}

/**
 * The k candidates (sorted, distinct) whose cells leave the least variance, neighbours at least
 * `apart`; exact, by dynamic programming with monotone divide and conquer, O(k m log m) after
 * Wu 1991 (J Algorithms 12:663). Null when k do not fit.
 */
export function bestThresholds(
  prior: Pick<Prior, 'atoms' | 'mean'>,
  candidates: ArrayLike<number>,
  k: number,
  apart: number,
): number[] | null {
  const m = candidates.length;
  if (k === 0) return [];
  if (mostLevels(candidates, apart) < k) return null;
  const { mass, moment } = cumulate(prior.atoms, prior.mean, candidates);
  const gain = (i: number, j: number) => {
    const w = mass[j]! - mass[i]!;
    const s = moment[j]! - moment[i]!;
    return w > 0 ? (s * s) / w : 0;
  };
  const room = roomBelow(candidates, apart);
  let best = Float64Array.from({ length: m }, (_, j) => gain(0, j + 1));
  const from: Int32Array[] = [new Int32Array(m)];
  for (let level = 1; level < k; level += 1) {
    const step = nextLevel(best, room, gain);
    best = step.best;
    from.push(step.from);
  }
  let end = -1;
  for (let j = 0; j < m; j += 1) {
    if (best[j] === -Infinity) continue;
    const total = best[j]! + gain(j + 1, m + 1);
    if (end < 0 || total > best[end]! + gain(end + 1, m + 1)) end = j;
  }
  const chosen: number[] = [];
  for (let level = k - 1; level >= 0; level -= 1) {
    chosen.push(candidates[end]!);
    end = from[level]![end]!;
  }
  return chosen.reverse();
}

/** One more threshold: for each j the best i ≤ room[j] − 1, whose optimum moves only upwards. */
function nextLevel(
  best: Float64Array,
  room: Int32Array,
  gain: (i: number, j: number) => number,
): { best: Float64Array<ArrayBuffer>; from: Int32Array } {
  const m = best.length;
  const out = new Float64Array(m).fill(-Infinity);
  const from = new Int32Array(m).fill(-1);
  let first = 0;
  while (first < m && best[first] === -Infinity) first += 1;
  let start = 0;
  while (start < m && room[start]! <= first) start += 1;
  const work: [number, number, number, number][] = [[start, m - 1, first, m - 1]];
  for (let job = work.pop(); job !== undefined; job = work.pop()) {
    const [jLow, jHigh, iLow, iHigh] = job;
    if (jLow > jHigh) continue;
    const j = (jLow + jHigh) >> 1;
    let top = iLow;
    for (let i = iLow; i <= Math.min(iHigh, room[j]! - 1); i += 1) {
      const total = best[i]! + gain(i + 1, j + 1);
      if (total > out[j]!) {
        out[j] = total;
        top = i;
      }
    }
    from[j] = top;
    work.push([jLow, j - 1, iLow, top], [j + 1, jHigh, top, iHigh]);
  }
  return { best: out, from };
}
