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
  const n = t.length;
  const width = trend.length + 3;
  const state = new Float64Array(3 * width);
  const innovation = new Float64Array(width);
  const cross = new Float64Array(width * width);
  return (d: Dynamics): Likelihood | null => {
    const columns = d.frequency === null ? width - 2 : width;
    state.fill(0);
    cross.fill(0);
    if (d.frequency !== null) {
      state[3 * (width - 2)] = 1;
      state[3 * (width - 1) + 1] = 1;
    }
    const omega = 2 * Math.PI * (d.frequency ?? 0);
    let [p00, p01, p11, p02, p12, p22] = [0, 0, 0, 0, 0, d.driftVariance];
    let logDet = 0;
    for (let i = 0; i < n; i++) {
      if (i > 0) {
        const dt = t[i]! - t[i - 1]!;
        const e = Math.exp(d.growth * dt);
        const g = Math.exp(-d.driftRate * dt);
        const input = d.drive * increment(d.growth, dt, e);
        p00 = e * e * p00 + input;
        p11 = e * e * p11 + input;
        p01 *= e * e;
        p02 *= e * g;
        p12 *= e * g;
        p22 = g * g * p22 + d.driftVariance * (1 - g * g);
        for (let j = 0; j < columns; j++) {
          state[3 * j]! *= e;
          state[3 * j + 1]! *= e;
          state[3 * j + 2]! *= g;
        }
      }
      const c = d.frequency === null ? 0 : Math.cos(omega * t[i]!);
      const s = d.frequency === null ? 0 : -Math.sin(omega * t[i]!);
      const h0 = p00 * c + p01 * s + p02;
      const h1 = p01 * c + p11 * s + p12;
      const h2 = p02 * c + p12 * s + p22;
      const f = h0 * c + h1 * s + h2 + 1;
      logDet += Math.log(f);
      for (let j = 0; j < columns; j++) {
        const x = j === 0 ? y[i]! : j <= trend.length ? trend[j - 1]![i]! : 0;
        const v = x - state[3 * j]! * c - state[3 * j + 1]! * s - state[3 * j + 2]!;
        innovation[j] = v;
        state[3 * j]! += (h0 / f) * v;
        state[3 * j + 1]! += (h1 / f) * v;
        state[3 * j + 2]! += (h2 / f) * v;
        for (let k = 0; k <= j; k++) cross[j * width + k]! += (v * innovation[k]!) / f;
      }
      p00 -= (h0 * h0) / f;
      p01 -= (h0 * h1) / f;
      p11 -= (h1 * h1) / f;
      p02 -= (h0 * h2) / f;
      p12 -= (h1 * h2) / f;
      p22 -= (h2 * h2) / f;
    }
    return concentrate(cross, width, columns, n, logDet, floor);
  };
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
