import { luFactor, luSolve } from '../linalg/lu';
import { type Crossing, inspectCrossing, locateCrossing, onsetJacobian } from '../onset/locate';
import { ModeChange } from '../steady/mode-change';
import type { BranchContext } from '../steady/node';
import { Problem, stateScale } from '../steady/problem';

/** An onset with the value of the second parameter. */
export interface CurvePoint extends Crossing {
  readonly second: number;
}

/** Unit direction along the curve, in scaled unknowns (x, ω, control, second). */
type Direction = Float64Array;

/**
 * The onset curve in (control, second): pseudo-arclength on f = 0, g(iω) = 0 in the unknowns
 * (x, ω, control, second), scaled by the state's sizes, ω itself, and the two ranges.
 */
export class OnsetCurve {
  private readonly twin: Problem;
  private readonly twinChange: ModeChange;
  private readonly n: number;
  private readonly scale: Float64Array<ArrayBuffer>;

  constructor(
    /** Works in the control; its parameter values carry the second one's present value. */
    readonly context: BranchContext,
    readonly secondIndex: number,
    readonly secondRange: { from: number; to: number },
  ) {
    const { problem, work } = context;
    this.n = problem.n;
    this.twin = new Problem(problem.system, problem.p, secondIndex);
    this.twinChange = new ModeChange(this.twin, work);
    this.scale = new Float64Array(problem.n);
  }

  private get secondWidth(): number {
    return this.secondRange.to - this.secondRange.from;
  }

  setSecond(second: number): void {
    this.context.problem.p[this.secondIndex] = second;
  }

  /** Everything but the pair stable, a genuine pair, physical. */
  isOnset(point: CurvePoint): boolean {
    this.setSecond(point.second);
    const scale = stateScale(point.x, Float64Array.from(this.context.seen));
    if (!this.context.problem.isPhysical(point.x, scale)) return false;
    const report = inspectCrossing(this.context, point);
    return report !== null && report.others === 0;
  }

  /** Polishes a point with the second parameter fixed. */
  atSecond(guess: CurvePoint, second: number): CurvePoint | null {
    this.setSecond(second);
    const found = locateCrossing(this.context, guess);
    return found ? { ...found, second } : null;
  }

  /** Matrix of the extended system at a point, last row `border`; also leaves f and g evaluated. */
  private matrix(point: CurvePoint, border: Direction): Float64Array | null {
    const { context, twin, twinChange, n } = this;
    const { problem, work, change } = context;
    const m = n + 3;
    this.setSecond(point.second);
    if (!(point.omega > 0) || !problem.linearise(point.x, point.control)) return null;
    twin.p.set(problem.p);
    if (!twin.linearise(point.x, point.second)) return null;
    stateScale(point.x, Float64Array.from(context.seen), this.scale);
    work.reset(this.scale);
    for (let pass = 0; pass < 2; pass++) {
      if (!work.solve(0, point.omega)) return null;
      work.adapt();
    }
    if (!work.solve(0, point.omega)) return null;
    const mode = { re: 0, im: point.omega };
    change.take(mode);
    twinChange.take(mode);
    const a = onsetJacobian(context, this.scale, point.omega, m);
    const [sr, si] = twinChange.along(null, this.secondWidth);
    for (let i = 0; i < n; i++) a[i * m + n + 2] = twin.fc[i]! * this.secondWidth;
    a[n * m + n + 2] = sr;
    a[(n + 1) * m + n + 2] = si;
    for (let j = 0; j < m; j++) a[(n + 2) * m + j] = border[j]!;
    return a;
  }

  /** The unit direction at a point, on the side of `along`. */
  direction(point: CurvePoint, along: Direction): Direction | null {
    const m = this.n + 3;
    const a = this.matrix(point, along);
    if (!a) return null;
    const lu = luFactor(a, m);
    if (lu.outcome === 'singular') return null;
    const t = new Float64Array(m);
    t[m - 1] = 1;
    luSolve(lu, t);
    const size = Math.hypot(...t);
    return size > 0 && Number.isFinite(size) ? t.map((v) => v / size) : null;
  }

  /** The point moved by `by` scaled unknowns. */
  moved(point: CurvePoint, by: Float64Array): CurvePoint {
    const { n } = this;
    const scale = stateScale(point.x, Float64Array.from(this.context.seen));
    return {
      x: point.x.map((v, i) => v + by[i]! * scale[i]!),
      omega: point.omega * (1 + by[n]!),
      control: point.control + by[n + 1]! * this.context.width,
      second: point.second + by[n + 2]! * this.secondWidth,
    };
  }

  /**
   * Newton onto the curve across `direction`. Converged: a correction below 1e-12, or at the rounding
   * floor. At most 12 steps.
   */
  correct(guess: CurvePoint, direction: Direction): { point: CurvePoint; steps: number } | null {
    const m = this.n + 3;
    let point = guess;
    let last = Number.POSITIVE_INFINITY;
    for (let steps = 1; steps <= 12; steps++) {
      const a = this.matrix(point, direction);
      if (!a) return null;
      const { problem, work } = this.context;
      const step = new Float64Array(m);
      for (let i = 0; i < this.n; i++) step[i] = -problem.f[i]!;
      step[this.n] = -work.gr;
      step[this.n + 1] = -work.gi;
      const lu = luFactor(a, m);
      if (lu.outcome === 'singular') return null;
      luSolve(lu, step);
      let size = 0;
      for (const v of step) size = Math.max(size, Math.abs(v));
      if (!Number.isFinite(size) || size > 0.5 || (steps > 2 && size > last && size > 1e-9)) {
        return null;
      }
      point = this.moved(point, step);
      if (size < 1e-12 || (size < 1e-9 && size > last / 4)) return { point, steps };
      last = size;
    }
    return null;
  }
}
