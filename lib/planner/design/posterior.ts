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
    let choose = 1;
    for (let s = 0; s <= r; s += 1) {
      table[s * m + j] = choose * p ** s * q ** (r - s);
      choose = (choose * (r - s)) / (s + 1);
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

/**
 * The same by equidistributed points instead of all outcomes: onsets stratified, verdict counts
 * from Richtmyer's sequence (n √p, fractional part). Standard error near 1/√points of itself.
 */
function gainByPoints(atoms: Atoms, tables: Float64Array[], r: number, points: number): number {
  const m = atoms.x.length;
  const roots = primes(tables.length).map(Math.sqrt);
  const joint = new Float64Array(m);
  let gain = 0;
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
      let u = ((n + 1) * roots[i]!) % 1;
      let s = 0;
      while (s < r && u >= table[s * m + truth]!) {
        u -= table[s * m + truth]!;
        s += 1;
      }
      let top = 0;
      for (let j = 0, at = s * m; j < m; j += 1, at += 1) {
        joint[j]! *= table[at]!;
        if (joint[j]! > top) top = joint[j]!;
      }
      if (top > 0 && top < 1e-200) for (let j = 0; j < m; j += 1) joint[j]! /= top;
    }
    let [w, moment] = [0, 0];
    for (let j = 0; j < m; j += 1) {
      w += joint[j]!;
      moment += joint[j]! * atoms.x[j]!;
    }
    if (w > 0) gain += (moment / w) ** 2 / points;
  }
  return gain;
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
  const gain = tree ?? gainByPoints(centred, tables, r, effort.points);
  return { variance: Math.min(sd * sd, Math.max(0, sd * sd - gain)), byPoints: tree === null };
}

export const SEARCH_EFFORT: Effort = { prune: 1e-5, cap: 20_000, points: 1024 };
export const REPORT_EFFORT: Effort = { prune: 1e-8, cap: 200_000, points: 8192 };

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
