import type { Columns } from './least-squares';
import { solveCholesky } from './least-squares';

/**
 * A damped oscillation with measurement noise, in a record whose time runs from 0 to 1:
 *   y(t) = trend + Re[u(t) e^(iωt)] + o(t) + ε,   du = σ u dt + √q dW,   ε ~ N(0, s²)
 * with u complex and isotropic, u(0) free, and o an Ornstein–Uhlenbeck drift. With drive 0 it is
 * the deterministic A e^(σt) cos(ωt + φ); with drive it is a continuous-time AR(2) rhythm.
 */
export type Dynamics = {
  /** σ, per record. */
  growth: number;
  /** cycles per record; null leaves the oscillation out. */
  frequency: number | null;
  /** q / s², per record. */
  drive: number;
  /** Variance of o over s², and its relaxation rate per record. */
  driftVariance: number;
  driftRate: number;
};

export type Likelihood = { logLikelihood: number; noiseVariance: number };

export const NO_DRIFT = { driftVariance: 0, driftRate: 1 } as const;

/**
 * Kalman filter (Harvey 1989) with the trend's coefficients and u(0) estimated by generalised
 * least squares in the same pass (augmented filter, de Jong 1991, Ann Stat 19:1073) and s²
 * concentrated out, not below `floor`². Readings may be uneven. O(n) for a fixed model.
 */
export function makeLikelihood(t: Float64Array, y: Float64Array, trend: Columns, floor: number) {
  const filter = new AugmentedFilter(t, y, trend);
  return (d: Dynamics): Likelihood | null => {
    const columns = filter.columnsFor(d);
    const logDet = filter.run(d, columns);
    return concentrate(filter.cross, filter.width, columns, t.length, logDet, floor);
  };
}

/** One pass over the readings; its work arrays are kept from one model to the next. */
class AugmentedFilter {
  readonly width: number;
  /** Cross products of the innovations of y (column 0), trend and u(0), each over its variance. */
  readonly cross: Float64Array;
  private readonly state: Float64Array;
  private readonly innovation: Float64Array;
  /** Covariance of (u₁, u₂, o): 00, 01, 11, 02, 12, 22. */
  private readonly p = new Float64Array(6);
  private readonly inputs: Float64Array[];

  constructor(
    private readonly t: Float64Array,
    y: Float64Array,
    trend: Columns,
  ) {
    this.width = trend.length + 3;
    this.cross = new Float64Array(this.width * this.width);
    this.state = new Float64Array(3 * this.width);
    this.innovation = new Float64Array(this.width);
    this.inputs = [y, ...trend];
  }

  columnsFor(d: Dynamics): number {
    return d.frequency === null ? this.width - 2 : this.width;
  }

  /** Runs the filter; gives Σ ln F. Equal gaps reuse their exponentials and turn the phase. */
  run(d: Dynamics, columns: number): number {
    const { t, p } = this;
    this.start(d);
    const omega = 2 * Math.PI * (d.frequency ?? 0);
    let [gap, e, g, input, turnCos, turnSin] = [-1, 1, 1, 0, 1, 0];
    let [c, s] =
      d.frequency === null ? [0, 0] : [Math.cos(omega * t[0]!), -Math.sin(omega * t[0]!)];
    let [logDet, det] = [0, 1];
    for (let i = 0; i < t.length; i++) {
      if (i > 0) {
        const dt = t[i]! - t[i - 1]!;
        if (Math.abs(dt - gap) > 1e-13) {
          gap = dt;
          e = Math.exp(d.growth * dt);
          g = Math.exp(-d.driftRate * dt);
          input = d.drive * increment(d.growth, dt, e);
          turnCos = Math.cos(omega * dt);
          turnSin = -Math.sin(omega * dt);
        }
        [c, s] = [c * turnCos - s * turnSin, s * turnCos + c * turnSin];
        this.predict(e, g, input, d.driftVariance, columns);
      }
      det *= this.update(i, c, s, columns);
      if (det > 1e200 || det < 1e-200) {
        logDet += Math.log(det);
        det = 1;
      }
    }
    return p.every(Number.isFinite) ? logDet + Math.log(det) : Number.NaN;
  }

  private start(d: Dynamics): void {
    this.state.fill(0);
    this.cross.fill(0);
    this.p.fill(0);
    this.p[5] = d.driftVariance;
    if (d.frequency === null) return;
    this.state[3 * (this.width - 2)] = 1;
    this.state[3 * (this.width - 1) + 1] = 1;
  }

  private predict(e: number, g: number, input: number, drift: number, columns: number): void {
    const { p, state } = this;
    const ee = e * e;
    p[0] = ee * p[0]! + input;
    p[1] = ee * p[1]!;
    p[2] = ee * p[2]! + input;
    p[3] = e * g * p[3]!;
    p[4] = e * g * p[4]!;
    p[5] = g * g * p[5]! + drift * (1 - g * g);
    for (let k = 0; k < 3 * columns; k += 3) {
      state[k] = state[k]! * e;
      state[k + 1] = state[k + 1]! * e;
      state[k + 2] = state[k + 2]! * g;
    }
  }

  /** Takes reading i in; gives the innovation's variance over s². */
  private update(i: number, c: number, s: number, columns: number): number {
    const { p, state, innovation, cross, inputs, width } = this;
    const h0 = p[0]! * c + p[1]! * s + p[3]!;
    const h1 = p[1]! * c + p[2]! * s + p[4]!;
    const h2 = p[3]! * c + p[4]! * s + p[5]!;
    const f = h0 * c + h1 * s + h2 + 1;
    const [k0, k1, k2] = [h0 / f, h1 / f, h2 / f];
    for (let j = 0; j < columns; j++) {
      const x = j < inputs.length ? inputs[j]![i]! : 0;
      const v = x - state[3 * j]! * c - state[3 * j + 1]! * s - state[3 * j + 2]!;
      innovation[j] = v;
      state[3 * j] = state[3 * j]! + k0 * v;
      state[3 * j + 1] = state[3 * j + 1]! + k1 * v;
      state[3 * j + 2] = state[3 * j + 2]! + k2 * v;
      const scaled = v / f;
      for (let k = 0; k <= j; k++) {
        cross[j * width + k] = cross[j * width + k]! + scaled * innovation[k]!;
      }
    }
    p[0] = p[0]! - h0 * k0;
    p[1] = p[1]! - h0 * k1;
    p[2] = p[2]! - h1 * k1;
    p[3] = p[3]! - h0 * k2;
    p[4] = p[4]! - h1 * k2;
    p[5] = p[5]! - h2 * k2;
    return f;
  }
}

/** ∫ e^(2σ(dt − s)) ds over one step. */
function increment(growth: number, dt: number, e: number): number {
  return Math.abs(growth * dt) < 1e-8 ? dt : (e * e - 1) / (2 * growth);
}

/** Removes the regression from the innovations' cross products (not for regressors that vanish). */
function concentrate(
  cross: Float64Array,
  width: number,
  columns: number,
  n: number,
  logDet: number,
  floor: number,
): Likelihood | null {
  const at = (a: number, b: number) => cross[Math.max(a, b) * width + Math.min(a, b)]!;
  const used: number[] = [];
  for (let j = 1; j < columns; j++) if (at(j, j) > 1e-12) used.push(j);
  const solution = solveCholesky(
    used.map((a) => used.map((b) => at(a, b))),
    used.map((a) => at(a, 0)),
  );
  if (solution === null) return null;
  const sum = Math.max(0, at(0, 0) - used.reduce((s, a, k) => s + solution[k]! * at(a, 0), 0));
  const noiseVariance = Math.max(sum / n, floor * floor);
  const logLikelihood =
    (-n / 2) * Math.log(noiseVariance) - sum / (2 * noiseVariance) + n / 2 - logDet / 2;
  return Number.isFinite(logLikelihood) ? { logLikelihood, noiseVariance } : null;
}
