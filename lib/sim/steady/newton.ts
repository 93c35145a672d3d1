import { luFactor, luSolve } from '../linalg/lu';
import { type Problem, stateScale } from './problem';

export type NewtonOutcome = 'converged' | 'left-physical-range' | 'no-convergence' | 'singular';

/**
 * Damped Newton for f(x) = 0 at a fixed control. `x` is the guess and holds the answer afterwards.
 *
 * The step is halved until the scaled size of the next Newton correction shrinks (the natural
 * monotonicity test; Deuflhard 2004, §2.1), which does not depend on the units of f. Converged: a full
 * correction below 1e-12 of the variables' scale, or at the rounding floor. At most `cap` steps.
 */
export function newton(
  problem: Problem,
  x: Float64Array,
  control: number,
  seen: Float64Array,
  cap = 60,
): NewtonOutcome {
  const n = problem.n;
  const step = new Float64Array(n);
  const trial = new Float64Array(n);
  const scale = new Float64Array(n);
  const matrix = new Float64Array(n * n);
  const pivots = new Int32Array(n);
  const largest = Float64Array.from(seen);
  const reference = x.map((v, i) => Math.max(Math.abs(v), seen[i]!));
  let last = Number.POSITIVE_INFINITY;
  for (let iteration = 0; iteration < cap; iteration++) {
    if (!problem.linearise(x, control)) return 'no-convergence';
    matrix.set(problem.total);
    const lu = luFactor(matrix, n, pivots);
    if (lu.outcome === 'singular') return 'singular';
    for (let i = 0; i < n; i++) step[i] = -problem.f[i]!;
    luSolve(lu, step);
    if (iteration === 0) {
      for (let i = 0; i < n; i++) reference[i] = Math.max(reference[i]!, Math.abs(step[i]!));
    }
    stateScale(x, largest, scale);
    if (ranAway(x, reference)) return 'no-convergence';
    const size = scaledSize(step, tightened(x, scale));
    if (!Number.isFinite(size)) return 'singular';
    if (size < 1e-12 || (size < 1e-9 && size >= last / 4)) {
      for (let i = 0; i < n; i++) x[i] = x[i]! + step[i]!;
      return problem.isPhysical(x, scale) ? 'converged' : 'left-physical-range';
    }
    last = size;
    let damping = 1;
    for (; damping > 1e-5; damping /= 2) {
      for (let i = 0; i < n; i++) trial[i] = x[i]! + damping * step[i]!;
      if (!problem.residual(trial, control)) continue;
      const next = Float64Array.from(problem.f, (v) => -v);
      luSolve(lu, next);
      if (scaledSize(next, tightened(x, scale)) <= (1 - damping / 4) * size) break;
    }
    if (damping <= 1e-5) return 'no-convergence';
    x.set(trial);
    if (!problem.isPhysical(x, scale)) return 'left-physical-range';
  }
  return 'no-convergence';
}

/** An iterate far beyond guess and first correction can only be on its way to infinity. */
function ranAway(x: Float64Array, reference: Float64Array): boolean {
  return x.some((v, i) => Math.abs(v) > 1e10 * reference[i]! && reference[i]! > 0);
}

/** Components that are not zero to rounding are judged by their own size, whatever was passed on the way. */
function tightened(x: Float64Array, scale: Float64Array): Float64Array {
  return scale.map((s, i) =>
    Math.abs(x[i]!) > 1e-13 * s ? Math.max(Math.abs(x[i]!), 1e-9 * s) : s,
  );
}

/** Largest |v_i| / scale_i. */
export function scaledSize(v: Float64Array, scale: Float64Array): number {
  let size = 0;
  for (let i = 0; i < v.length; i++) {
    const s = Math.abs(v[i]!) / scale[i]!;
    if (!(s <= size)) size = s;
  }
  return size;
}
