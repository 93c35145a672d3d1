/**
 * A model compiled to plain functions.
 *
 * n variables, m parameters, K distinct delays. Everything is dense and row-major in Float64Array.
 * The stacked argument is z = (x, x(t − τ₁), …, x(t − τ_K)), length n·(K + 1): block 0 is the present
 * state, block k the whole state lagged by delay k. At an equilibrium every block equals x.
 */
export interface CompiledSystem {
  readonly n: number;
  readonly m: number;
  /** K: number of distinct delay expressions; 0 for an ordinary system. */
  readonly K: number;
  readonly variables: readonly string[];
  readonly parameters: readonly string[];
  readonly readouts: readonly { symbol: string; unit?: string; noiseSd: number }[];
  /** The model's `start` values, length n. */
  readonly start: Float64Array;
  /** The model's nominal parameter values, length m. */
  readonly values: Float64Array;
  readonly nonnegative: readonly boolean[];
  parameterIndex(symbol: string): number;
  /** τ_k(p) into `out`, length K. */
  delays(p: Float64Array, out: Float64Array): void;
  /** f(z, p) into `out`, length n. */
  rhs(z: Float64Array, p: Float64Array, out: Float64Array): void;
  /** ∂f/∂z into `out`, n × n(K + 1), row-major: row i, column k·n + j is ∂f_i/∂x_j(t − τ_k). */
  jacobian(z: Float64Array, p: Float64Array, out: Float64Array): void;
  /** ∂f/∂p_j into `out`, length n; the delays' own dependence on p_j is not in it. */
  parameterDerivative(z: Float64Array, p: Float64Array, j: number, out: Float64Array): void;
  /** ∂τ_k/∂p_j into `out`, length K. */
  delayDerivative(p: Float64Array, j: number, out: Float64Array): void;
  /** Second derivatives as a directional form: Σ ∂²f/∂z_a∂z_b u_a v_b into `out`, length n. */
  second(
    z: Float64Array,
    p: Float64Array,
    u: Float64Array,
    v: Float64Array,
    out: Float64Array,
  ): void;
  /** Third derivatives as a directional form: Σ ∂³f/∂z_a∂z_b∂z_c u_a v_b w_c into `out`, length n. */
  third(
    z: Float64Array,
    p: Float64Array,
    u: Float64Array,
    v: Float64Array,
    w: Float64Array,
    out: Float64Array,
  ): void;
  /** ∂/∂p_j of the Jacobian into `out`, same shape as `jacobian`. */
  jacobianParameter(z: Float64Array, p: Float64Array, j: number, out: Float64Array): void;
  /** Readout values at z into `out`, in the order of `readouts`. */
  readout(z: Float64Array, p: Float64Array, out: Float64Array): void;
}
