import { type Characteristic, lag } from './characteristic';
import type { Problem } from './problem';
import type { Root } from './spectrum';

/** Scratch space for directional derivatives of the characteristic matrix. */
export class ModeChange {
  private readonly modeR: Float64Array;
  private readonly modeI: Float64Array;
  private readonly direction: Float64Array;
  private readonly yr: Float64Array;
  private readonly yi: Float64Array;
  private readonly jacSlope: Float64Array;
  private lambda: Root = { re: 0, im: 0 };

  constructor(
    private readonly problem: Problem,
    private readonly work: Characteristic,
  ) {
    const { n, K } = problem;
    const width = n * (K + 1);
    this.modeR = new Float64Array(width);
    this.modeI = new Float64Array(width);
    this.direction = new Float64Array(width);
    this.yr = new Float64Array(n);
    this.yi = new Float64Array(n);
    this.jacSlope = new Float64Array(n * width);
  }

  /** Takes over the mode v e^(λθ) that `work` holds. */
  take(lambda: Root): void {
    this.lambda = lambda;
    this.work.stack(lambda.re, lambda.im, this.modeR, this.modeI);
  }

  /**
   * dg along a change (dx, dcontrol) of state and control: uᴴ d[A + ΣB_k e^(−λτ_k)] v, through second
   * derivatives of f, the Jacobian's dependence on the control, and the delays' own.
   */
  along(dx: Float64Array | null, dControl: number): [number, number] {
    const { problem, yr, yi, modeR, modeI } = this;
    const { system, n, K, z, p } = problem;
    yr.fill(0);
    yi.fill(0);
    if (dx) {
      for (let k = 0; k <= K; k++) this.direction.set(dx, k * n);
      system.second(z, p, this.direction, modeR, yr);
      system.second(z, p, this.direction, modeI, yi);
    }
    if (dControl !== 0) {
      system.jacobianParameter(z, p, problem.controlIndex, this.jacSlope);
      const width = n * (K + 1);
      for (let i = 0; i < n; i++) {
        for (let a = 0; a < width; a++) {
          const d = this.jacSlope[i * width + a]! * dControl;
          if (d === 0) continue;
          yr[i] = yr[i]! + d * modeR[a]!;
          yi[i] = yi[i]! + d * modeI[a]!;
        }
      }
      for (let k = 1; k <= K; k++) this.addDelay(k, problem.tauSlope[k - 1]! * dControl);
    }
    return this.work.project(yr, yi);
  }

  /** Adds d(B_k e^(−λτ_k)) v for a change of τ_k: −λ dτ_k B_k e^(−λτ_k) v. */
  private addDelay(k: number, dTau: number): void {
    if (dTau === 0) return;
    const { n, K, jac, tau } = this.problem;
    const width = n * (K + 1);
    const { re, im } = this.lambda;
    const [er, ei] = lag(re, im, tau[k - 1]!);
    const fr = -dTau * (re * er - im * ei);
    const fi = -dTau * (re * ei + im * er);
    for (let i = 0; i < n; i++) {
      let br = 0;
      let bi = 0;
      for (let j = 0; j < n; j++) {
        const v = jac[i * width + k * n + j]!;
        br += v * this.work.vr[j]!;
        bi += v * this.work.vi[j]!;
      }
      this.yr[i] = this.yr[i]! + fr * br - fi * bi;
      this.yi[i] = this.yi[i]! + fr * bi + fi * br;
    }
  }

  /** dλ along (dx, dcontrol) for the root that `work` was polished on. */
  rootSlope(dx: Float64Array | null, dControl: number): Root {
    const [gr, gi] = this.along(dx, dControl);
    const [dr, di] = this.work.slope(this.lambda.re, this.lambda.im);
    const d = dr * dr + di * di;
    return { re: (gr * dr + gi * di) / d, im: (gi * dr - gr * di) / d };
  }
}
