import type { DesignRequest } from '@/lib/contracts';
import { EngineError } from '@/lib/contracts';
import { normalMass, normalPdf } from './normal';

/**
 * A discretised onset: sorted places `x` (dose), weights `w` that add to one, and the variance `v`
 * inside each place, so that mean and variance of the whole are those of what was discretised.
 */
export type Atoms = { x: Float64Array; w: Float64Array; v: Float64Array };
export type Prior = { mean: number; sd: number; normal: boolean; atoms: Atoms };

type Moments = { w: number; x: number; v: number };

const NORMAL_SLICES = 1200;
const NORMAL_REACH = 6;
const DOUBT_SLICES = 48;
/** Sorted draws beyond this number are pooled before doubt is put on them. */
const DRAWS_UNDER_DOUBT = 1000;
const ATOMS_UNDER_DOUBT = 2000;

/** Slices of a normal of equal width over ± 6 sd, the outer ones open; O(NORMAL_SLICES). */
export function normalAtoms(mean: number, sd: number, slices = NORMAL_SLICES): Atoms {
  if (sd === 0) return packed([{ w: 1, x: mean, v: 0 }]);
  const list: Moments[] = [];
  for (let i = 0; i < slices; i += 1) {
    const a = i === 0 ? -Infinity : -NORMAL_REACH + (2 * NORMAL_REACH * i) / slices;
    const b = i === slices - 1 ? Infinity : -NORMAL_REACH + (2 * NORMAL_REACH * (i + 1)) / slices;
    const w = normalMass(a, b);
    const pa = Number.isFinite(a) ? normalPdf(a) : 0;
    const pb = Number.isFinite(b) ? normalPdf(b) : 0;
    const c = (pa - pb) / w;
    const second = 1 + ((pa === 0 ? 0 : a * pa) - (pb === 0 ? 0 : b * pb)) / w;
    list.push({ w, x: mean + sd * c, v: sd * sd * Math.max(0, second - c * c) });
  }
  return packed(list);
}

function packed(list: Moments[]): Atoms {
  const total = list.reduce((s, a) => s + a.w, 0);
  return {
    x: Float64Array.from(list, (a) => a.x),
    w: Float64Array.from(list, (a) => a.w / total),
    v: Float64Array.from(list, (a) => a.v),
  };
}

/** Equal places become one; the rest stays exact. */
function distinctAtoms(values: readonly number[]): Atoms {
  const sorted = Float64Array.from(values).sort();
  const list: Moments[] = [];
  for (const x of sorted) {
    const last = list.at(-1);
    if (last !== undefined && last.x === x) last.w += 1;
    else list.push({ w: 1, x, v: 0 });
  }
  return packed(list);
}

/**
 * Neighbouring atoms pooled until a pool holds 1/size of the weight or spans 12 sd/size; at most
 * about 2 · size remain. Mean and total variance are kept; O(n).
 */
export function pooled(atoms: Atoms, size: number): Atoms {
  if (atoms.x.length <= size) return atoms;
  const { mean, sd } = momentsOf(atoms);
  const widest = (2 * NORMAL_REACH * sd) / size;
  const list: Moments[] = [];
  let start = Number.NEGATIVE_INFINITY;
  for (let i = 0; i < atoms.x.length; i += 1) {
    const next = { w: atoms.w[i]!, x: atoms.x[i]! - mean, v: atoms.v[i]! };
    const last = list.at(-1);
    if (last === undefined || last.w + next.w > 1 / size || next.x - start > widest) {
      list.push(next);
      start = next.x;
      continue;
    }
    const w = last.w + next.w;
    const x = (last.w * last.x + next.w * next.x) / w;
    const second = last.w * (last.v + last.x ** 2) + next.w * (next.v + next.x ** 2);
    list[list.length - 1] = { w, x, v: Math.max(0, second / w - x * x) };
  }
  return packed(list.map((a) => ({ ...a, x: a.x + mean })));
}

/** Mean and sd of a discretised onset. */
export function momentsOf(atoms: Atoms): { mean: number; sd: number } {
  let mean = 0;
  for (let i = 0; i < atoms.x.length; i += 1) mean += atoms.w[i]! * atoms.x[i]!;
  let variance = 0;
  for (let i = 0; i < atoms.x.length; i += 1) {
    variance += atoms.w[i]! * ((atoms.x[i]! - mean) ** 2 + atoms.v[i]!);
  }
  return { mean, sd: Math.sqrt(variance) };
}

/** Slices of exp(s Z) with their exact first two moments (partial moments of the lognormal). */
function lognormalFactors(s: number): Moments[] {
  const list: Moments[] = [];
  const edge = (i: number) =>
    i <= 0
      ? -Infinity
      : i >= DOUBT_SLICES
        ? Infinity
        : -NORMAL_REACH + (2 * NORMAL_REACH * i) / DOUBT_SLICES;
  for (let i = 0; i < DOUBT_SLICES; i += 1) {
    const [a, b] = [edge(i), edge(i + 1)];
    const w = normalMass(a, b);
    if (w < 1e-15) continue;
    const x = (Math.exp((s * s) / 2) * normalMass(a - s, b - s)) / w;
    const second = (Math.exp(2 * s * s) * normalMass(a - 2 * s, b - 2 * s)) / w;
    list.push({ w, x, v: Math.max(0, second - x * x) });
  }
  return list;
}

/** Product of independent variables, atom by atom: E and Var of XY from those of X and Y. */
function multiplied(atoms: Atoms, factors: Moments[]): Atoms {
  const list: Moments[] = [];
  for (let i = 0; i < atoms.x.length; i += 1) {
    const [x, v] = [atoms.x[i]!, atoms.v[i]!];
    for (const f of factors) {
      const variance = (v + x * x) * (f.v + f.x * f.x) - (x * f.x) ** 2;
      list.push({ w: atoms.w[i]! * f.w, x: x * f.x, v: Math.max(0, variance) });
    }
  }
  return packed(list.sort((p, q) => p.x - q.x));
}

function added(atoms: Atoms, sd: number): Atoms {
  const noise = normalAtoms(0, sd, DOUBT_SLICES);
  const list: Moments[] = [];
  for (let i = 0; i < atoms.x.length; i += 1) {
    for (let j = 0; j < noise.x.length; j += 1) {
      const w = atoms.w[i]! * noise.w[j]!;
      list.push({ w, x: atoms.x[i]! + noise.x[j]!, v: atoms.v[i]! + noise.v[j]! });
    }
  }
  return packed(list.sort((p, q) => p.x - q.x));
}

function normalPrior(mean: number, sd: number): Prior {
  return { mean, sd, normal: sd > 0, atoms: normalAtoms(mean, sd) };
}

function atomPrior(atoms: Atoms): Prior {
  return { ...momentsOf(atoms), normal: false, atoms };
}

/** A stated normal counts as positive when less than 1 % of it lies at or below zero. */
const POSITIVE_SDS = 2.3263;

/**
 * The onset as believed before the series: the draws or the normal, with model doubt put on it.
 * Doubt is an independent lognormal factor; for onsets that can be ≤ 0, an independent normal of
 * sd doubt · (hi − lo). Not cut at the range. Throws `limit-exceeded` where its variance or the
 * width of the range is beyond what a number can hold.
 */
export function priorOf(request: Pick<DesignRequest, 'onset' | 'doubt' | 'range'>): Prior {
  const prior = doubted(request);
  if (!Number.isFinite(prior.mean) || !Number.isFinite(prior.sd ** 2)) {
    const at = request.doubt > 3 ? 'doubt' : 'onset';
    throw new EngineError(
      'limit-exceeded',
      'the spread of the onset is too large to work with',
      at,
    );
  }
  if (!Number.isFinite(request.range[1] - request.range[0])) {
    throw new EngineError('limit-exceeded', 'the range is too wide to work with', 'range');
  }
  return prior;
}

function doubted(request: Pick<DesignRequest, 'onset' | 'doubt' | 'range'>): Prior {
  const { onset, doubt, range } = request;
  const extra = doubt * (range[1] - range[0]);
  if ('mean' in onset) {
    const { mean, sd } = onset;
    if (doubt === 0) return normalPrior(mean, sd);
    if (mean - POSITIVE_SDS * sd <= 0) return normalPrior(mean, Math.hypot(sd, extra));
    const atoms = normalAtoms(mean, sd, 400);
    return atomPrior(pooled(multiplied(atoms, lognormalFactors(doubt)), ATOMS_UNDER_DOUBT));
  }
  const draws = distinctAtoms(onset.values);
  if (doubt === 0) return atomPrior(draws);
  const few = pooled(draws, DRAWS_UNDER_DOUBT);
  const spread = draws.x[0]! > 0 ? multiplied(few, lognormalFactors(doubt)) : added(few, extra);
  return atomPrior(pooled(spread, ATOMS_UNDER_DOUBT));
}

/** Share of the prior above a dose. */
export function shareAbove(prior: Prior, dose: number): number {
  let share = 0;
  for (let i = 0; i < prior.atoms.x.length; i += 1) {
    if (prior.atoms.x[i]! > dose) share += prior.atoms.w[i]!;
  }
  return share;
}

/** The prior seen from the other end of the dose axis. */
export function mirrored(prior: Prior): Prior {
  const flip = (a: Float64Array) => Float64Array.from(a).reverse();
  const { x, w, v } = prior.atoms;
  return {
    ...prior,
    mean: -prior.mean,
    atoms: { x: flip(x).map((value) => -value), w: flip(w), v: flip(v) },
  };
}
