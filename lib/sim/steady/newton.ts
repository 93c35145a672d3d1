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
  let last = Number.POSITIVE_INFINITY;
  for (let iteration = 0; iteration < cap; iteration++) {
    if (!problem.linearise(x, control)) return 'no-convergence';
    matrix.set(problem.total);
    const lu = luFactor(matrix, n, pivots);
    if (lu.outcome === 'singular') return 'singular';
    for (let i = 0; i < n; i++) step[i] = -problem.f[i]!;
    luSolve(lu, step);
    stateScale(x, seen, scale);
    const size = scaledSize(step, scale);
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
      if (scaledSize(next, scale) <= (1 - damping / 4) * size) break;
    }
    if (damping <= 1e-5) return 'no-convergence';
    x.set(trial);
    if (!problem.isPhysical(x, scale)) return 'left-physical-range';
  }
  return 'no-convergence';
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
