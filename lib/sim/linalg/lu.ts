/**
 * Dense LU factorisation with scaled partial pivoting, row-major, real.
 *
 * P·A = L·U; the pivot in each column is the entry largest relative to its row's largest entry, so that
 * rows in different units are treated alike (Golub & Van Loan 2013, §3.4).
 */
export interface Lu {
  readonly n: number;
  /** L (unit, below the diagonal) and U, overwritten on the matrix given. */
  readonly a: Float64Array;
  readonly pivots: Int32Array;
  readonly outcome: 'ok' | 'singular';
  /** Smallest scaled pivot; 0 for an exactly singular matrix. A cheap measure of closeness to singularity. */
  readonly smallestPivot: number;
}

const scales = new Float64Array(1024);

/** Factorises `a` (n × n) in place. Never throws; look at `outcome` before use. */
export function luFactor(a: Float64Array, n: number, pivots: Int32Array = new Int32Array(n)): Lu {
  const scale = n <= scales.length ? scales : new Float64Array(n);
  let smallest = Number.POSITIVE_INFINITY;
  for (let i = 0; i < n; i++) {
    let largest = 0;
    for (let j = 0; j < n; j++) largest = Math.max(largest, Math.abs(a[i * n + j]!));
    if (!(largest > 0) || !Number.isFinite(largest)) {
      return { n, a, pivots, outcome: 'singular', smallestPivot: 0 };
    }
    scale[i] = largest;
  }
  for (let k = 0; k < n; k++) {
    let best = -1;
    let row = k;
    for (let i = k; i < n; i++) {
      const size = Math.abs(a[i * n + k]!) / scale[i]!;
      if (size > best) {
        best = size;
        row = i;
      }
    }
    pivots[k] = row;
    if (!(best > 0)) return { n, a, pivots, outcome: 'singular', smallestPivot: 0 };
    smallest = Math.min(smallest, best);
    if (row !== k) {
      scale[row] = scale[k]!;
      for (let j = 0; j < n; j++) {
        const held = a[k * n + j]!;
        a[k * n + j] = a[row * n + j]!;
        a[row * n + j] = held;
      }
    }
    const pivot = a[k * n + k]!;
    for (let i = k + 1; i < n; i++) {
      const factor = a[i * n + k]! / pivot;
      a[i * n + k] = factor;
      if (factor !== 0) {
        for (let j = k + 1; j < n; j++) a[i * n + j] = a[i * n + j]! - factor * a[k * n + j]!;
      }
    }
  }
  return { n, a, pivots, outcome: 'ok', smallestPivot: smallest };
}

/** Solves A·x = b in place, with the factors of A. */
export function luSolve(lu: Lu, b: Float64Array): void {
  const { n, a, pivots } = lu;
  for (let k = 0; k < n; k++) {
    const row = pivots[k]!;
    if (row !== k) {
      const held = b[k]!;
      b[k] = b[row]!;
      b[row] = held;
    }
  }
  for (let i = 1; i < n; i++) {
    let sum = b[i]!;
    for (let j = 0; j < i; j++) sum -= a[i * n + j]! * b[j]!;
    b[i] = sum;
  }
  for (let i = n - 1; i >= 0; i--) {
    let sum = b[i]!;
    for (let j = i + 1; j < n; j++) sum -= a[i * n + j]! * b[j]!;
    b[i] = sum / a[i * n + i]!;
  }
}
