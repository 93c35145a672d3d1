import { eigenvalues } from '../linalg/eigenvalues';
import { luFactor, luSolve } from '../linalg/lu';
import { newton, scaledSize } from './newton';
import { type Problem, stateScale } from './problem';

export interface FlowResult {
  readonly outcome: 'settled' | 'not-settled' | 'left-physical-range' | 'diverged';
  readonly x: Float64Array;
  /** Time average of the state over the second half of the steps: a guess inside an oscillation. */
  readonly mean: Float64Array;
}

const GAMMA = 1 / (2 + Math.SQRT2);

/**
 * Follows x' = f(x, x, …) (delays ignored) from `x0` to where it settles.
 *
 * Rosenbrock pair of order 2(3), L-stable (Shampine & Reichelt 1997), scaled tolerance 1e-3. Every 20
 * steps Newton is tried; its answer counts once it lies within 2 % of the present state and is stable
 * without the delays, so that a passing unstable state is not taken. At most 4,000 steps.
 */
export function settle(
  problem: Problem,
  x0: Float64Array,
  control: number,
  seen: Float64Array,
): FlowResult {
  const n = problem.n;
  const x = Float64Array.from(x0);
  const mean = new Float64Array(n);
  const scale = new Float64Array(n);
  let weight = 0;
  let early: Float64Array | null = null;
  let h = initialStep(problem, x, control, seen);
  for (let step = 1; step <= 4000; step++) {
    stateScale(x, seen, scale);
    const used = rosenbrockStep(problem, x, control, scale, h);
    if (used.outcome === 'failed') return { outcome: 'diverged', x, mean };
    if (step === 20) early = x.map((v, i) => Math.max(Math.abs(v), seen[i]!));
    if (early?.some((e, i) => Math.abs(x[i]!) > 1e12 * e && e > 0)) {
      return { outcome: 'diverged', x, mean };
    }
    if (
      !problem.isPhysical(
        x,
        scale.map((s) => 1e6 * s),
      )
    ) {
      return { outcome: 'left-physical-range', x, mean };
    }
    for (let i = 0; i < n; i++) if (problem.system.nonnegative[i] && x[i]! < 0) x[i] = 0;
    if (step > 100) {
      weight += used.h;
      for (let i = 0; i < n; i++) mean[i] = mean[i]! + (x[i]! - mean[i]!) * (used.h / weight);
    }
    if (step % 20 === 0) {
      const there = nearbyStable(problem, x, control, seen, scale);
      if (there) return { outcome: 'settled', x: there, mean };
    }
    h = used.next;
  }
  return { outcome: 'not-settled', x, mean };
}

function initialStep(problem: Problem, x: Float64Array, control: number, seen: Float64Array) {
  if (!problem.residual(x, control)) return 1e-6;
  const rate = scaledSize(problem.f, stateScale(x, seen));
  return rate > 0 ? 1e-3 / rate : 1;
}

function nearbyStable(
  problem: Problem,
  x: Float64Array,
  control: number,
  seen: Float64Array,
  scale: Float64Array,
): Float64Array | null {
  const guess = Float64Array.from(x);
  if (newton(problem, guess, control, Float64Array.from(seen), 20) !== 'converged') return null;
  const gap = guess.map((v, i) => v - x[i]!);
  if (scaledSize(gap, scale) > 0.02) return null;
  problem.linearise(guess, control);
  const roots = eigenvalues(Float64Array.from(problem.total), problem.n);
  if (roots.outcome !== 'ok') return null;
  return roots.re.every((re) => re <= 1e-12 * roots.norm) ? guess : null;
}

type Step = { outcome: 'ok'; h: number; next: number } | { outcome: 'failed' };

/** One accepted step; `x` moves on. */
function rosenbrockStep(
  problem: Problem,
  x: Float64Array,
  control: number,
  scale: Float64Array,
  h0: number,
): Step {
  let h = h0;
  if (!problem.linearise(x, control)) return { outcome: 'failed' };
  const jac = Float64Array.from(problem.total);
  const f0 = Float64Array.from(problem.f);
  for (let attempt = 0; attempt < 40; attempt++) {
    const tried = attemptStep(problem, x, control, scale, h, jac, f0);
    if (!tried) {
      h /= 3;
      continue;
    }
    const { next, error } = tried;
    if (error > 1e-3) {
      h *= Math.max(0.2, 0.8 * (1e-3 / error) ** (1 / 3));
      continue;
    }
    x.set(next);
    return { outcome: 'ok', h, next: h * Math.min(5, 0.8 * (1e-3 / (error || 1e-12)) ** (1 / 3)) };
  }
  return { outcome: 'failed' };
}

/** The three stages with step h, and the scaled error; null where f is not finite on the way. */
function attemptStep(
  problem: Problem,
  x: Float64Array,
  control: number,
  scale: Float64Array,
  h: number,
  jac: Float64Array,
  f0: Float64Array,
): { next: Float64Array; error: number } | null {
  const n = problem.n;
  const w = jac.map((v) => -h * GAMMA * v);
  for (let i = 0; i < n; i++) w[i * n + i] = w[i * n + i]! + 1;
  const lu = luFactor(w, n);
  if (lu.outcome === 'singular') return null;
  const k1 = Float64Array.from(f0);
  luSolve(lu, k1);
  if (!problem.residual(add(x, k1, h / 2), control)) return null;
  const f1 = Float64Array.from(problem.f);
  const k2 = f1.map((v, i) => v - k1[i]!);
  luSolve(lu, k2);
  for (let i = 0; i < n; i++) k2[i] = k2[i]! + k1[i]!;
  const next = add(x, k2, h);
  if (!problem.residual(next, control)) return null;
  const e = 6 + Math.SQRT2;
  const k3 = problem.f.map((v, i) => v - e * (k2[i]! - f1[i]!) - 2 * (k1[i]! - f0[i]!));
  luSolve(lu, k3);
  const gap = k1.map((v, i) => (h / 6) * (v - 2 * k2[i]! + k3[i]!));
  return { next, error: scaledSize(gap, scale) };
}

function add(x: Float64Array, v: Float64Array, h: number): Float64Array {
  return x.map((xi, i) => xi + h * v[i]!);
}
