/** Columns of a design matrix, each as long as the observations. */
export type Columns = Float64Array[];

export type LinearFit = {
  /** Coefficient of each column; 0 where the column depends on earlier ones. */
  coefficients: number[];
  residuals: Float64Array;
  rss: number;
  rank: number;
};

/**
 * Ordinary least squares by modified Gram–Schmidt on the augmented matrix [X y]
 * (Björck 1967, BIT 7:1). Shapes: p columns of length n, y of length n.
 * Columns that depend on earlier ones to 1e-10 are left out.
 */
export function leastSquares(columns: Columns, y: ArrayLike<number>): LinearFit {
  const n = y.length;
  const p = columns.length;
  const q = columns.map((c) => Float64Array.from(c));
  const r = Array.from({ length: p }, () => new Float64Array(p));
  const projections = new Float64Array(p);
  const residuals = Float64Array.from(y);
  const kept: number[] = [];
  for (let j = 0; j < p; j++) {
    const column = q[j]!;
    const before = norm(column);
    for (const k of kept) {
      r[k]![j] = dot(q[k]!, column);
      subtract(column, q[k]!, r[k]![j]!);
    }
    const after = norm(column);
    if (!(after > 1e-10 * before)) continue;
    for (let i = 0; i < n; i++) column[i]! /= after;
    r[j]![j] = after;
    projections[j] = dot(column, residuals);
    subtract(residuals, column, projections[j]!);
    kept.push(j);
  }
  const coefficients = new Array<number>(p).fill(0);
  for (let a = kept.length - 1; a >= 0; a--) {
    const j = kept[a]!;
    let sum = projections[j]!;
    for (let b = a + 1; b < kept.length; b++) sum -= r[j]![kept[b]!]! * coefficients[kept[b]!]!;
    coefficients[j] = sum / r[j]![j]!;
  }
  return { coefficients, residuals, rss: dot(residuals, residuals), rank: kept.length };
}

export function dot(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}

function norm(a: Float64Array): number {
  return Math.sqrt(dot(a, a));
}

function subtract(target: Float64Array, direction: Float64Array, amount: number): void {
  for (let i = 0; i < target.length; i++) target[i]! -= amount * direction[i]!;
}

/** Solves a small symmetric positive definite system; null when it is singular to 1e-13. */
export function solveCholesky(matrix: number[][], right: number[]): number[] | null {
  const n = right.length;
  const l = matrix.map((row) => [...row]);
  for (let j = 0; j < n; j++) {
    let d = l[j]![j]!;
    for (let k = 0; k < j; k++) d -= l[j]![k]! ** 2;
    if (!(d > 1e-13 * Math.abs(matrix[j]![j]!))) return null;
    const root = Math.sqrt(d);
    l[j]![j] = root;
    for (let i = j + 1; i < n; i++) {
      let s = l[i]![j]!;
      for (let k = 0; k < j; k++) s -= l[i]![k]! * l[j]![k]!;
      l[i]![j] = s / root;
    }
  }
  const x = [...right];
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < i; k++) x[i]! -= l[i]![k]! * x[k]!;
    x[i]! /= l[i]![i]!;
  }
  for (let i = n - 1; i >= 0; i--) {
    for (let k = i + 1; k < n; k++) x[i]! -= l[k]![i]! * x[k]!;
    x[i]! /= l[i]![i]!;
  }
  return x;
}
