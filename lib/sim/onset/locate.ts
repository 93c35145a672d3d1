import { luFactor, luSolve } from '../linalg/lu';
import { nullVectors } from '../steady/characteristic';
import type { BranchContext } from '../steady/node';
import { stateScale } from '../steady/problem';
import { type Spectrum, spectrum } from '../steady/spectrum';

/** A purely imaginary pair ±iω of the steady state x at `control`. */
export interface Crossing {
  readonly x: Float64Array;
  readonly omega: number;
  readonly control: number;
}

/**
 * Newton on f(x, c) = 0, g(x, iω, c) = 0 in (x, ω, c), g the bordered scalar of the characteristic
 * matrix: one code for ordinary systems, delays, and a delay as the control (Griewank & Reddien 1983).
 * Steps are cut to 0.3 in scaled size. Converged: below 1e-13, or at the rounding floor. At most 30.
 */
export function locateCrossing(context: BranchContext, guess: Crossing): Crossing | null {
  const { problem, work, change } = context;
  const n = problem.n;
  const m = n + 2;
  const x = Float64Array.from(guess.x);
  const scale = new Float64Array(n);
  const seen = Float64Array.from(context.seen);
  let { omega, control } = guess;
  let last = Number.POSITIVE_INFINITY;
  stateScale(x, seen, scale);
  work.reset(scale);
  for (let iteration = 0; iteration < 30; iteration++) {
    if (!(omega > 0) || !problem.linearise(x, control)) return null;
    stateScale(x, seen, scale);
    if (!work.solve(0, omega)) return null;
    if (iteration === 0) {
      work.adapt();
      if (!work.solve(0, omega)) return null;
    }
    const step = new Float64Array(m);
    for (let i = 0; i < n; i++) step[i] = -problem.f[i]!;
    step[n] = -work.gr;
    step[n + 1] = -work.gi;
    change.take({ re: 0, im: omega });
    const lu = luFactor(onsetJacobian(context, scale, omega), m);
    if (lu.outcome === 'singular') return null;
    luSolve(lu, step);
    work.adapt();
    let size = 0;
    for (let i = 0; i < m; i++) size = Math.max(size, Math.abs(step[i]!));
    if (!Number.isFinite(size)) return null;
    const cut = Math.min(1, 0.3 / size);
    for (let i = 0; i < n; i++) x[i] = x[i]! + cut * step[i]! * scale[i]!;
    omega += cut * step[n]! * omega;
    control += cut * step[n + 1]! * context.width;
    if (size < 1e-13 || (size < 1e-9 && size > last / 4)) return { x, omega, control };
    last = size;
  }
  return null;
}

/**
 * Jacobian of (f, Re g, Im g) by (x, ω, c), columns in scaled variables, in the leading part of an m × m
 * matrix (m = n + 2, or more where a caller adds rows and columns). The workspace must hold the mode.
 */
export function onsetJacobian(
  context: BranchContext,
  scale: Float64Array,
  omega: number,
  m = context.problem.n + 2,
): Float64Array {
  const { problem, work, change, width } = context;
  const n = problem.n;
  const a = new Float64Array(m * m);
  const unit = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) a[i * m + j] = problem.total[i * n + j]! * scale[j]!;
    a[i * m + n + 1] = problem.fc[i]! * width;
  }
  for (let j = 0; j < n; j++) {
    unit[j] = scale[j]!;
    const [gr, gi] = change.along(unit, 0);
    unit[j] = 0;
    a[n * m + j] = gr;
    a[(n + 1) * m + j] = gi;
  }
  // dg/dω = −i uᴴΔ′(iω)v.
  const [dr, di] = work.slope(0, omega);
  a[n * m + n] = di * omega;
  a[(n + 1) * m + n] = -dr * omega;
  const [cr, ci] = change.along(null, width);
  a[n * m + n + 1] = cr;
  a[(n + 1) * m + n + 1] = ci;
  return a;
}

export interface CrossingReport {
  /** Unstable dimensions other than the pair itself. */
  readonly others: number;
  /** d Re λ / d control, total derivative along the branch. */
  readonly growthSlope: number;
  readonly spectrum: Spectrum;
}

/**
 * Checks a crossing against the whole spectrum at its place: the pair is there, and how many other
 * dimensions are unstable. Null where it is no genuine complex pair (tiny ω: a double zero or a real
 * crossing). Leaves the problem linearised and the pair's null vectors in the context's workspace.
 */
export function inspectCrossing(context: BranchContext, at: Crossing): CrossingReport | null {
  const { problem, work, change } = context;
  const scale = stateScale(at.x, Float64Array.from(context.seen));
  if (!problem.linearise(at.x, at.control)) return null;
  const spec = spectrum(problem, work, scale);
  if (!(at.omega > 1e-9 * spec.norm)) return null;
  let best = -1;
  let gap = Number.POSITIVE_INFINITY;
  spec.roots.forEach((r, i) => {
    const d = Math.hypot(r.re, r.im - at.omega);
    if (d < gap) {
      gap = d;
      best = i;
    }
  });
  if (best < 0 || gap > 1e-5 * at.omega + 1e2 * spec.tolerance) return null;
  let others = 0;
  spec.roots.forEach((r, i) => {
    if (i !== best && r.re > spec.tolerance) others += r.im > 0 ? 2 : 1;
  });
  const growthSlope = slopeAlongBranch(context, at, scale);
  if (growthSlope === null) return null;
  change.take({ re: 0, im: at.omega });
  return { others, growthSlope, spectrum: spec };
}

function slopeAlongBranch(
  context: BranchContext,
  at: Crossing,
  scale: Float64Array,
): number | null {
  const { problem, work, change } = context;
  const n = problem.n;
  if (!nullVectors(work, scale, 0, at.omega)) return null;
  const lu = luFactor(Float64Array.from(problem.total), n);
  if (lu.outcome === 'singular') return null;
  const dx = Float64Array.from(problem.fc, (v) => -v);
  luSolve(lu, dx);
  change.take({ re: 0, im: at.omega });
  const slope = change.rootSlope(dx, 1).re;
  return Number.isFinite(slope) ? slope : null;
}
