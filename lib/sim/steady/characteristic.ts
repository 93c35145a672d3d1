import {
  type ComplexScratch,
  complexLuFactor,
  complexLuSolve,
  complexLuSolveAdjoint,
} from '../linalg/complex-lu';
import type { Problem } from './problem';

/**
 * The characteristic matrix Δ(λ) = λI − A − Σ B_k e^(−λτ_k), its derivatives, and the bordered system
 *
 *   [ Δ  b ] [v]   [0]          [ Δ  b ]ᴴ [u]   [0]
 *   [ cᴴ 0 ] [g] = [1]    and   [ cᴴ 0 ]  [h] = [1]
 *
 * whose scalar g(λ) vanishes exactly where Δ is singular (Griewank & Reddien 1983; Govaerts 2000).
 * For any parameter s of Δ, dg/ds = −uᴴ (∂Δ/∂s) v. At a root, v and u are right and left null vectors.
 */
export class Characteristic {
  readonly size: number;
  readonly vr: Float64Array;
  readonly vi: Float64Array;
  readonly ur: Float64Array;
  readonly ui: Float64Array;
  gr = 0;
  gi = 0;
  /** Border vectors b and c (real and imaginary parts). */
  private readonly br: Float64Array;
  private readonly bi: Float64Array;
  private readonly cr: Float64Array;
  private readonly ci: Float64Array;
  private readonly scale: Float64Array;
  private readonly ar: Float64Array;
  private readonly ai: Float64Array;
  private readonly xr: Float64Array;
  private readonly xi: Float64Array;
  private readonly scratch: ComplexScratch;

  constructor(readonly problem: Problem) {
    const n = problem.n;
    this.size = n;
    const make = () => new Float64Array(n);
    this.vr = make();
    this.vi = make();
    this.ur = make();
    this.ui = make();
    this.br = make();
    this.bi = make();
    this.cr = make();
    this.ci = make();
    this.scale = make().fill(1);
    this.ar = new Float64Array((n + 1) * (n + 1));
    this.ai = new Float64Array((n + 1) * (n + 1));
    this.xr = new Float64Array(n + 1);
    this.xi = new Float64Array(n + 1);
    this.scratch = { pivots: new Int32Array(n + 1), scale: new Float64Array(n + 1) };
  }

  /** Fresh borders, sized by the variables' scale; their directions are fixed and generic. */
  reset(scale: Float64Array): void {
    this.scale.set(scale);
    for (let i = 0; i < this.size; i++) {
      const s = scale[i]!;
      this.br[i] = s * (0.6 + 0.4 * Math.sin(1.7 * i + 0.3));
      this.bi[i] = s * 0.5 * Math.cos(2.3 * i + 0.9);
      this.cr[i] = (0.6 + 0.4 * Math.cos(1.3 * i + 0.7)) / s;
      this.ci[i] = (0.5 * Math.sin(1.9 * i + 0.4)) / s;
    }
  }

  /** Borders from the latest null vectors: the best conditioned choice near a root. */
  adapt(): void {
    let norm = 0;
    let dual = 0;
    for (let i = 0; i < this.size; i++) {
      const s = this.scale[i]!;
      norm += (this.vr[i]! ** 2 + this.vi[i]! ** 2) / (s * s);
      dual += (this.ur[i]! ** 2 + this.ui[i]! ** 2) * s * s;
    }
    if (!(norm > 0) || !(dual > 0) || !Number.isFinite(norm) || !Number.isFinite(dual)) return;
    for (let i = 0; i < this.size; i++) {
      const s2 = this.scale[i]! ** 2;
      this.cr[i] = this.vr[i]! / (s2 * Math.sqrt(norm));
      this.ci[i] = this.vi[i]! / (s2 * Math.sqrt(norm));
      this.br[i] = (this.ur[i]! * s2) / Math.sqrt(dual);
      this.bi[i] = (this.ui[i]! * s2) / Math.sqrt(dual);
    }
  }

  /** Solves both bordered systems at λ for the problem's present linearisation. */
  solve(re: number, im: number): boolean {
    const n = this.size;
    const m = n + 1;
    const { ar: a, ai: b, xr, xi } = this;
    characteristicMatrix(this.problem, re, im, a, b, m);
    a[m * m - 1] = 0;
    b[m * m - 1] = 0;
    for (let i = 0; i < n; i++) {
      a[i * m + n] = this.br[i]!;
      b[i * m + n] = this.bi[i]!;
      a[n * m + i] = this.cr[i]!;
      b[n * m + i] = -this.ci[i]!;
    }
    const lu = complexLuFactor(a, b, m, this.scratch);
    if (lu.outcome === 'singular') return false;
    xr.fill(0);
    xi.fill(0);
    xr[n] = 1;
    complexLuSolve(lu, xr, xi);
    this.gr = xr[n]!;
    this.gi = xi[n]!;
    for (let i = 0; i < n; i++) {
      this.vr[i] = xr[i]!;
      this.vi[i] = xi[i]!;
    }
    xr.fill(0);
    xi.fill(0);
    xr[n] = 1;
    complexLuSolveAdjoint(lu, xr, xi);
    for (let i = 0; i < n; i++) {
      this.ur[i] = xr[i]!;
      this.ui[i] = xi[i]!;
    }
    return Number.isFinite(this.gr) && Number.isFinite(this.gi);
  }

  /** uᴴ Δ′(λ) v. */
  slope(re: number, im: number): [number, number] {
    const { n, K, jac, tau } = this.problem;
    const width = n * (K + 1);
    let sr = 0;
    let si = 0;
    for (let i = 0; i < n; i++) {
      let wr = this.vr[i]!;
      let wi = this.vi[i]!;
      for (let k = 1; k <= K; k++) {
        const [er, ei] = lag(re, im, tau[k - 1]!);
        let yr = 0;
        let yi = 0;
        for (let j = 0; j < n; j++) {
          const v = jac[i * width + k * n + j]!;
          yr += v * this.vr[j]!;
          yi += v * this.vi[j]!;
        }
        wr += tau[k - 1]! * (er * yr - ei * yi);
        wi += tau[k - 1]! * (er * yi + ei * yr);
      }
      sr += this.ur[i]! * wr + this.ui[i]! * wi;
      si += this.ur[i]! * wi - this.ui[i]! * wr;
    }
    return [sr, si];
  }

  /** The stacked history of the mode v e^(λθ): (v, v e^(−λτ₁), …), real and imaginary parts. */
  stack(re: number, im: number, outR: Float64Array, outI: Float64Array): void {
    stackMode(this.problem, this.vr, this.vi, re, im, outR, outI);
  }

  /** uᴴ y. */
  project(yr: Float64Array, yi: Float64Array): [number, number] {
    let sr = 0;
    let si = 0;
    for (let i = 0; i < this.size; i++) {
      sr += this.ur[i]! * yr[i]! + this.ui[i]! * yi[i]!;
      si += this.ur[i]! * yi[i]! - this.ui[i]! * yr[i]!;
    }
    return [sr, si];
  }
}

/** e^(−λτ). */
export function lag(re: number, im: number, tau: number): [number, number] {
  const size = Math.exp(-re * tau);
  return [size * Math.cos(im * tau), -size * Math.sin(im * tau)];
}

/** (q, q e^(−λτ₁), …) for q = qr + i·qi. */
export function stackMode(
  problem: Problem,
  qr: Float64Array,
  qi: Float64Array,
  re: number,
  im: number,
  outR: Float64Array,
  outI: Float64Array,
): void {
  const { n, K, tau } = problem;
  for (let j = 0; j < n; j++) {
    outR[j] = qr[j]!;
    outI[j] = qi[j]!;
  }
  for (let k = 1; k <= K; k++) {
    const [er, ei] = lag(re, im, tau[k - 1]!);
    for (let j = 0; j < n; j++) {
      outR[k * n + j] = er * qr[j]! - ei * qi[j]!;
      outI[k * n + j] = er * qi[j]! + ei * qr[j]!;
    }
  }
}

/** Δ(λ) into the leading n × n block of two arrays with row length `stride`. */
export function characteristicMatrix(
  problem: Problem,
  re: number,
  im: number,
  a: Float64Array,
  b: Float64Array,
  stride: number,
): void {
  const { n, K, jac, tau } = problem;
  const width = n * (K + 1);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      a[i * stride + j] = -jac[i * width + j]!;
      b[i * stride + j] = 0;
    }
    a[i * stride + i] = a[i * stride + i]! + re;
    b[i * stride + i] = im;
  }
  for (let k = 1; k <= K; k++) {
    const [er, ei] = lag(re, im, tau[k - 1]!);
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        const v = jac[i * width + k * n + j]!;
        a[i * stride + j] = a[i * stride + j]! - v * er;
        b[i * stride + j] = b[i * stride + j]! - v * ei;
      }
    }
  }
}

/**
 * Null vectors for a root that is already accurate: one solve with generic borders, one with borders
 * from its answer. False where the bordered matrix is singular.
 */
export function nullVectors(
  work: Characteristic,
  scale: Float64Array,
  re: number,
  im: number,
): boolean {
  work.reset(scale);
  if (!work.solve(re, im)) return false;
  work.adapt();
  return work.solve(re, im);
}

/**
 * Newton on g(λ) from a guess, borders adapted as it goes. Converged: a step below 1e-13 of the
 * larger of |λ| and `floor` (a small share of the spectrum's size, for roots at zero), or at the rounding
 * floor. At most 30 steps. The null vectors stay in `work`.
 */
export function polishRoot(
  work: Characteristic,
  scale: Float64Array,
  re: number,
  im: number,
  floor: number,
): { re: number; im: number } | null {
  work.reset(scale);
  let r = re;
  let s = im;
  let last = Number.POSITIVE_INFINITY;
  for (let iteration = 0; iteration < 30; iteration++) {
    if (!work.solve(r, s)) {
      // An exact root makes Δ singular but not the bordered matrix; nudge off an unlucky border.
      r += 1e-12 * (Math.hypot(r, s) || 1);
      if (!work.solve(r, s)) return null;
    }
    if (iteration < 3) {
      work.adapt();
      if (!work.solve(r, s)) return null;
    }
    const [dr, di] = work.slope(r, s);
    const d = dr * dr + di * di;
    if (!(d > 0)) return null;
    // dg/dλ = −uᴴΔ′v, so the correction is +g / (uᴴΔ′v).
    const stepR = (work.gr * dr + work.gi * di) / d;
    const stepI = (work.gi * dr - work.gr * di) / d;
    r += stepR;
    s += stepI;
    const size = Math.hypot(stepR, stepI);
    const reference = Math.max(Math.hypot(r, s), floor);
    if (!Number.isFinite(size)) return null;
    if (
      iteration >= 2 &&
      (size <= 1e-13 * reference || (size < 1e-9 * reference && size >= last / 2))
    )
      return { re: r, im: s };
    last = size;
  }
  return null;
}
