import type { CompiledSystem } from '../equations/types';
import { luFactor, luSolve } from '../linalg/lu';

/**
 * One step of the stiffly accurate Rosenbrock method RODAS, order 4(3), for systems without delays
 * (Hairer & Wanner 1996, Solving Ordinary Differential Equations II, IV.7; coefficients of its program).
 * L-stable: the step is bounded by accuracy alone, however fast a process relaxes.
 */
const GAMMA = 0.25;
const A: readonly (readonly number[])[] = [
  [],
  [1.544],
  [0.9466785280815826, 0.2557011698983284],
  [3.314825187068521, 2.896124015972201, 0.9986419139977817],
  [1.221224509226641, 6.019134481288629, 12.53708332932087, -0.687886036105895],
  [1.221224509226641, 6.019134481288629, 12.53708332932087, -0.687886036105895, 1],
];
const C: readonly (readonly number[])[] = [
  [],
  [-5.6688],
  [-2.430093356833875, -0.2063599157091915],
  [-0.1073529058151375, -9.594562251023355, -20.47028614809616],
  [7.496443313967647, -10.24680431464352, -33.99990352819905, 11.7089089320616],
  [
    8.083246795921522, -7.981132988064893, -31.52159432874371, 16.31930543123136,
    -6.058818238834054,
  ],
];
const STAGES = 6;

export class RosenbrockStep {
  /** The estimated error of the last step, variable by variable. */
  readonly error: Float64Array;
  private readonly jacobian: Float64Array;
  private readonly matrix: Float64Array;
  private readonly u: Float64Array[];
  private readonly f: Float64Array;

  constructor(
    private readonly system: CompiledSystem,
    private readonly p: Float64Array,
  ) {
    const n = system.n;
    this.jacobian = new Float64Array(n * n);
    this.matrix = new Float64Array(n * n);
    this.u = Array.from({ length: STAGES }, () => new Float64Array(n));
    this.error = this.u[STAGES - 1]!;
    this.f = new Float64Array(n);
  }

  /** From x over h into `next`; false where the step cannot be computed. `slope` evaluates f. */
  take(
    x: Float64Array,
    h: number,
    next: Float64Array,
    slope: (y: Float64Array, out: Float64Array) => boolean,
  ): boolean {
    const n = this.system.n;
    this.system.jacobian(x, this.p, this.jacobian);
    for (let i = 0; i < n * n; i += 1) this.matrix[i] = -this.jacobian[i]!;
    for (let i = 0; i < n; i += 1)
      this.matrix[i * n + i] = this.matrix[i * n + i]! + 1 / (h * GAMMA);
    const lu = luFactor(this.matrix, n);
    if (lu.outcome !== 'ok') return false;
    for (let s = 0; s < STAGES; s += 1) {
      const u = this.u[s]!;
      combine(x, A[s]!, this.u, 1, next);
      if (!slope(next, this.f)) return false;
      combine(this.f, C[s]!, this.u, 1 / h, u);
      luSolve(lu, u);
    }
    for (let i = 0; i < n; i += 1) next[i] = next[i]! + this.error[i]!;
    return true;
  }
}

/** out = base + factor · Σ weights[j] · u[j] */
function combine(
  base: Float64Array,
  weights: readonly number[],
  u: readonly Float64Array[],
  factor: number,
  out: Float64Array,
): void {
  for (let i = 0; i < base.length; i += 1) {
    let sum = 0;
    for (let j = 0; j < weights.length; j += 1) sum += weights[j]! * u[j]![i]!;
    out[i] = base[i]! + factor * sum;
  }
}
