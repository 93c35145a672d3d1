import type { CompiledSystem } from '../equations/types';

/**
 * One compiled model with one parameter singled out as the control: the quantities every step of the
 * steady-state work needs, evaluated at an equilibrium candidate (every lagged block equal to x).
 * The arrays are the problem's own and are overwritten by the next evaluation.
 */
export class Problem {
  readonly n: number;
  readonly K: number;
  readonly z: Float64Array;
  /** f(x, p), length n. */
  readonly f: Float64Array;
  /** ∂f/∂control, length n. */
  readonly fc: Float64Array;
  /** Blocks A, B₁ … B_K side by side, n × n(K + 1). */
  readonly jac: Float64Array;
  /** A + ΣB_k, n × n. */
  readonly total: Float64Array;
  /** τ_k and dτ_k/dcontrol. */
  readonly tau: Float64Array;
  readonly tauSlope: Float64Array;
  readonly p: Float64Array;

  constructor(
    readonly system: CompiledSystem,
    parameters: Float64Array,
    readonly controlIndex: number,
  ) {
    const n = system.n;
    this.n = n;
    this.K = system.K;
    this.z = new Float64Array(n * (system.K + 1));
    this.f = new Float64Array(n);
    this.fc = new Float64Array(n);
    this.jac = new Float64Array(n * n * (system.K + 1));
    this.total = new Float64Array(n * n);
    this.tau = new Float64Array(system.K);
    this.tauSlope = new Float64Array(system.K);
    this.p = Float64Array.from(parameters);
  }

  /** Sets the control and the stacked argument. */
  place(x: Float64Array, control: number): void {
    this.p[this.controlIndex] = control;
    for (let k = 0; k <= this.K; k++) this.z.set(x, k * this.n);
  }

  /** f at (x, control); false where it is not finite. */
  residual(x: Float64Array, control: number): boolean {
    this.place(x, control);
    this.system.rhs(this.z, this.p, this.f);
    return allFinite(this.f);
  }

  /** f, its derivatives and the delays at (x, control); false where one is not finite. */
  linearise(x: Float64Array, control: number): boolean {
    this.place(x, control);
    const { system, n, K } = this;
    system.rhs(this.z, this.p, this.f);
    system.jacobian(this.z, this.p, this.jac);
    system.parameterDerivative(this.z, this.p, this.controlIndex, this.fc);
    const width = n * (K + 1);
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        let sum = this.jac[i * width + j]!;
        for (let k = 1; k <= K; k++) sum += this.jac[i * width + k * n + j]!;
        this.total[i * n + j] = sum;
      }
    }
    if (K > 0) {
      system.delays(this.p, this.tau);
      system.delayDerivative(this.p, this.controlIndex, this.tauSlope);
    }
    return allFinite(this.f) && allFinite(this.total) && allFinite(this.fc) && allFinite(this.tau);
  }

  /** True if every variable declared nonnegative is so, up to rounding against its scale. */
  isPhysical(x: Float64Array, scale: Float64Array): boolean {
    for (let i = 0; i < this.n; i++) {
      if (this.system.nonnegative[i] && x[i]! < -1e-9 * scale[i]!) return false;
    }
    return true;
  }
}

export function allFinite(a: Float64Array): boolean {
  for (let i = 0; i < a.length; i++) if (!Number.isFinite(a[i]!)) return false;
  return true;
}

/**
 * Sizes against which a state's components are judged: |x_i|, but not below a tenth of the largest size
 * seen for that variable (or 1 for one that has only ever been zero).
 */
export function stateScale(x: Float64Array, seen: Float64Array, out = new Float64Array(x.length)) {
  for (let i = 0; i < x.length; i++) {
    const size = Math.abs(x[i]!);
    if (size > seen[i]!) seen[i] = size;
    out[i] = Math.max(size, 0.1 * seen[i]!) || 1;
  }
  return out;
}
