import { normalCdf } from './normal';
import type { Atoms, Prior } from './prior';
import { momentsOf } from './prior';
import { certainVariance } from './quantiser';

/** How a level's verdicts come about: `blur` in dose (sd), and preparations a level. */
export type Reading = { blur: number; replicates: number };

/** P(s of r verdicts "sustained" | onset), per level: table[s · atoms + j]. */
function countTable(dose: number, atoms: Atoms, reading: Reading): Float64Array {
  const m = atoms.x.length;
  const r = reading.replicates;
  const table = new Float64Array((r + 1) * m);
  for (let j = 0; j < m; j += 1) {
    // The spread inside an atom widens the blur: exact for one verdict and a normal slice.
    const z = (dose - atoms.x[j]!) / Math.sqrt(reading.blur ** 2 + atoms.v[j]!);
    const [p, q] = [normalCdf(z), normalCdf(-z)];
    let rising = 1;
    for (let s = 0; s <= r; s += 1) {
      table[s * m + j] = rising;
      rising *= (p * (r - s)) / (s + 1);
    }
    let falling = 1;
    for (let s = r; s >= 0; s -= 1) {
      table[s * m + j]! *= falling;
      falling *= q;
    }
  }
  return table;
}

/**
 * Variance of the conditional mean by walking the tree of verdict counts, level by level. A branch
 * of probability below `prune` is not followed further (its information up to there counts, so
 * the answer errs to the cautious side by at most the share pruned). Null beyond `cap` nodes.
 */
function gainByTree(atoms: Atoms, tables: Float64Array[], r: number, prune: number, cap: number) {
  const m = atoms.x.length;
  const stack = tables.map(() => new Float64Array(m));
  let nodes = 0;
  let gain = 0;
  const visit = (depth: number, joint: Float64Array): boolean => {
    const table = tables[depth]!;
    const child = stack[depth]!;
    for (let s = 0; s <= r; s += 1) {
      nodes += 1;
      if (nodes > cap) return false;
      let [w, moment] = [0, 0];
      for (let j = 0, at = s * m; j < m; j += 1, at += 1) {
        const share = joint[j]! * table[at]!;
        child[j] = share;
        w += share;
        moment += share * atoms.x[j]!;
      }
      if (depth + 1 < tables.length && w > prune) {
        if (!visit(depth + 1, child)) return false;
      } else if (w > 0) gain += (moment * moment) / w;
    }
    return true;
  };
  return visit(0, atoms.w) ? gain : null;
}

const primes = (count: number): number[] => {
  const found: number[] = [];
  for (let n = 2; found.length < count; n += 1) if (found.every((p) => n % p !== 0)) found.push(n);
  return found;
};

/** Richtmyer's sequence: frac(n √p), one prime a dimension. */
function richtmyer(n: number, roots: readonly number[], i: number): number {
  return (n * roots[i]!) % 1;
}

/** Number of "sustained" verdicts at quantile u for the onset at atom `truth`. */
function countAt(table: Float64Array, m: number, truth: number, r: number, u: number): number {
  let left = u;
  let s = 0;
  while (s < r && left >= table[s * m + truth]!) {
    left -= table[s * m + truth]!;
    s += 1;
  }
  return s;
}

/** Multiplies the likelihood of s verdicts into `joint`, kept clear of underflow. */
function update(joint: Float64Array, table: Float64Array, s: number): void {
  const m = joint.length;
  let top = 0;
  for (let j = 0, at = s * m; j < m; j += 1, at += 1) {
    joint[j]! *= table[at]!;
    if (joint[j]! > top) top = joint[j]!;
  }
  if (top > 0 && top < 1e-100) for (let j = 0; j < m; j += 1) joint[j]! /= top;
}

function varianceUnder(joint: Float64Array, atoms: Atoms): number {
  let [w, moment] = [0, 0];
  for (let j = 0; j < joint.length; j += 1) {
    w += joint[j]!;
    moment += joint[j]! * atoms.x[j]!;
  }
  if (w === 0) return 0;
  const mean = moment / w;
  let variance = 0;
  for (let j = 0; j < joint.length; j += 1) {
    variance += joint[j]! * ((atoms.x[j]! - mean) ** 2 + atoms.v[j]!);
  }
  return variance / w;
}

/**
 * The expected variance by equidistributed points instead of all outcomes: onsets stratified,
 * verdict counts from Richtmyer's sequence. Standard error near 1/√points of the answer.
 */
function varianceByPoints(atoms: Atoms, tables: Float64Array[], r: number, points: number): number {
  const m = atoms.x.length;
  const roots = primes(tables.length).map(Math.sqrt);
  const joint = new Float64Array(m);
  let sum = 0;
  let truth = 0;
  let below = atoms.w[0]!;
  for (let n = 0; n < points; n += 1) {
    while (below < (n + 0.5) / points && truth < m - 1) {
      truth += 1;
      below += atoms.w[truth]!;
    }
    joint.set(atoms.w);
    for (let i = 0; i < tables.length; i += 1) {
      const table = tables[i]!;
      update(joint, table, countAt(table, m, truth, r, richtmyer(n + 1, roots, i)));
    }
    sum += varianceUnder(joint, atoms);
  }
  return sum / points;
}

export type Effort = { prune: number; cap: number; points: number };

/**
 * E[Var(onset | verdicts)] of levels read with blur, replicates independent. All outcomes where
 * they are few enough (`effort.cap` nodes), otherwise by `effort.points` points.
 * `byPoints` forces the latter, so that a search compares like with like.
 */
export function blurredVariance(
  atoms: Atoms,
  levels: readonly number[],
  reading: Reading,
  effort: Effort,
  byPoints = false,
): { variance: number; byPoints: boolean } {
  const { mean, sd } = momentsOf(atoms);
  if (levels.length === 0 || sd === 0) return { variance: sd * sd, byPoints };
  const centred = { ...atoms, x: atoms.x.map((x) => x - mean) };
  const tables = [...levels]
    .sort((a, b) => a - b)
    .map((d) => countTable(d - mean, centred, reading));
  const r = reading.replicates;
  const tree = byPoints ? null : gainByTree(centred, tables, r, effort.prune, effort.cap);
  const left = tree === null ? varianceByPoints(centred, tables, r, effort.points) : sd * sd - tree;
  return { variance: Math.min(sd * sd, Math.max(0, left)), byPoints: tree === null };
}

export const SEARCH_EFFORT: Effort = { prune: 1e-5, cap: 20_000, points: 600 };
export const REPORT_EFFORT: Effort = { prune: 1e-8, cap: 100_000, points: 2400 };

/** E[Var(onset | verdicts)], as reported; `atoms` a pooled prior where verdicts are blurred. */
export function expectedVariance(
  prior: Prior,
  atoms: Atoms,
  levels: readonly number[],
  reading: Reading,
): number {
  if (reading.blur === 0) return certainVariance(prior, levels);
  return blurredVariance(atoms, levels, reading, REPORT_EFFORT).variance;
}
