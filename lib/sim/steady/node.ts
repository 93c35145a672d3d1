import { luFactor, luSolve } from '../linalg/lu';
import { Characteristic, nullVectors } from './characteristic';
import { ModeChange } from './mode-change';
import { type Problem, stateScale } from './problem';
import { type Root, type Spectrum, spectrum } from './spectrum';

/** A complex root followed along the branch, with its derivative by scaled arclength. */
export interface TrackedRoot extends Root {
  readonly slope: Root;
}

/** One point of the branch. */
export interface Node {
  readonly x: Float64Array;
  readonly control: number;
  /** Unit tangent in the scaled metric of this node: dx/ds and dcontrol/ds. */
  readonly tangent: Float64Array;
  readonly controlSlope: number;
  readonly scale: Float64Array;
  readonly spectrum: Spectrum;
  readonly complex: readonly TrackedRoot[];
}

/** A step that loses nothing smooth: four hundredths of the range, or of a variable's size. */
export const COARSE_STEP = 0.04;
/** For the answer itself: narrower features are met, and the line is smooth to look at. */
export const FINE_STEP = 0.0125;

/** What the steps along one branch share. */
export class BranchContext {
  readonly work: Characteristic;
  readonly change: ModeChange;
  readonly seen: Float64Array;

  constructor(
    readonly problem: Problem,
    readonly from: number,
    readonly to: number,
    start: Float64Array,
    /** Largest scaled arclength of a step. */
    readonly largestStep = COARSE_STEP,
  ) {
    this.work = new Characteristic(problem);
    this.change = new ModeChange(problem, this.work);
    this.seen = Float64Array.from(start, (v) => Math.abs(v));
  }

  get width(): number {
    return this.to - this.from;
  }

  /** Scaled length of (dx, dcontrol): the states' share is a mean square, so that n does not count. */
  length(dx: Float64Array, dControl: number, scale: Float64Array): number {
    let sum = 0;
    for (let i = 0; i < dx.length; i++) sum += (dx[i]! / scale[i]!) ** 2;
    return Math.sqrt(sum / dx.length + (dControl / this.width) ** 2);
  }
}

/**
 * The branch's unit tangent at the present linearisation, on the side of (`dx`, `dControl`).
 * Null where the bordered Jacobian is singular (a bifurcation point hit exactly).
 */
export function tangentAt(
  context: BranchContext,
  scale: Float64Array,
  dx: Float64Array,
  dControl: number,
): { dx: Float64Array; dControl: number } | null {
  const n = context.problem.n;
  const matrix = borderedJacobian(context, scale, dx, dControl);
  const lu = luFactor(matrix, n + 1);
  if (lu.outcome === 'singular') return null;
  const rhs = new Float64Array(n + 1);
  rhs[n] = 1;
  luSolve(lu, rhs);
  const out = Float64Array.from(scale, (s, i) => s * rhs[i]!);
  const c = rhs[n]! * context.width;
  const size = context.length(out, c, scale);
  if (!(size > 0) || !Number.isFinite(size)) return null;
  for (let i = 0; i < n; i++) out[i] = out[i]! / size;
  return { dx: out, dControl: c / size };
}

/** Rows [f_x f_c] and the given direction, columns in scaled variables. */
export function borderedJacobian(
  context: BranchContext,
  scale: Float64Array,
  dx: Float64Array,
  dControl: number,
): Float64Array {
  const { problem, width } = context;
  const n = problem.n;
  const m = n + 1;
  const a = new Float64Array(m * m);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) a[i * m + j] = problem.total[i * n + j]! * scale[j]!;
    a[i * m + n] = problem.fc[i]! * width;
    a[n * m + i] = dx[i]! / scale[i]! / n;
  }
  a[n * m + n] = dControl / width;
  return a;
}

/** Linearises at (x, control) and gathers tangent, spectrum and the complex roots' slopes. */
export function makeNode(
  context: BranchContext,
  x: Float64Array,
  control: number,
  dx: Float64Array,
  dControl: number,
): Node | null {
  const { problem, work, change } = context;
  if (!problem.linearise(x, control)) return null;
  const scale = stateScale(x, context.seen);
  const tangent = tangentAt(context, scale, dx, dControl);
  if (!tangent) return null;
  const spec = spectrum(problem, work, scale);
  if (spec.roots.length === 0) return null;
  const complex: TrackedRoot[] = [];
  // A root far from the axis for its size does not reach it within one step.
  const candidates = spec.roots
    .filter((r) => r.im > 1e-9 * spec.norm && Math.abs(r.re) < 0.8 * Math.hypot(r.re, r.im))
    .sort((p, q) => Math.abs(p.re) - Math.abs(q.re))
    .slice(0, 4);
  for (const root of candidates) {
    if (!nullVectors(work, scale, root.re, root.im)) continue;
    change.take(root);
    const slope = change.rootSlope(tangent.dx, tangent.dControl);
    if (!Number.isFinite(slope.re) || !Number.isFinite(slope.im)) continue;
    complex.push({ re: root.re, im: root.im, slope });
  }
  return {
    x: Float64Array.from(x),
    control,
    tangent: tangent.dx,
    controlSlope: tangent.dControl,
    scale,
    spectrum: spec,
    complex,
  };
}
