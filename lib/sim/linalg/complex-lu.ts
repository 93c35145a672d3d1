/**
 * Dense complex LU with scaled partial pivoting, row-major, real and imaginary parts in two arrays.
 * The same scheme as `lu.ts`; used for the characteristic matrix and its bordered systems.
 */
export interface ComplexLu {
  readonly n: number;
  readonly re: Float64Array;
  readonly im: Float64Array;
  readonly pivots: Int32Array;
  readonly outcome: 'ok' | 'singular';
}

/** Work space that a caller may keep: n pivots and n row sizes. */
export interface ComplexScratch {
  readonly pivots: Int32Array;
  readonly scale: Float64Array;
}

/** Factorises re + i·im (n × n) in place. Never throws; look at `outcome` before use. */
export function complexLuFactor(
  re: Float64Array,
  im: Float64Array,
  n: number,
  scratch?: ComplexScratch,
): ComplexLu {
  const pivots = scratch?.pivots ?? new Int32Array(n);
  const scale = scratch?.scale ?? new Float64Array(n);
  for (let i = 0; i < n; i++) {
    let largest = 0;
    for (let j = i * n; j < (i + 1) * n; j++) {
      largest = Math.max(largest, Math.abs(re[j]!) + Math.abs(im[j]!));
    }
    if (!(largest > 0) || !Number.isFinite(largest))
      return { n, re, im, pivots, outcome: 'singular' };
    scale[i] = largest;
  }
  for (let k = 0; k < n; k++) {
    let best = -1;
    let row = k;
    for (let i = k; i < n; i++) {
      const size = (Math.abs(re[i * n + k]!) + Math.abs(im[i * n + k]!)) / scale[i]!;
      if (size > best) {
        best = size;
        row = i;
      }
    }
    pivots[k] = row;
    if (!(best > 0)) return { n, re, im, pivots, outcome: 'singular' };
    if (row !== k) {
      scale[row] = scale[k]!;
      swapRows(re, n, k, row);
      swapRows(im, n, k, row);
    }
    eliminate(re, im, n, k);
  }
  return { n, re, im, pivots, outcome: 'ok' };
}

function swapRows(m: Float64Array, n: number, a: number, b: number): void {
  for (let j = 0; j < n; j++) {
    const held = m[a * n + j]!;
    m[a * n + j] = m[b * n + j]!;
    m[b * n + j] = held;
  }
}

function eliminate(re: Float64Array, im: Float64Array, n: number, k: number): void {
  const pr = re[k * n + k]!;
  const pi = im[k * n + k]!;
  const d = pr * pr + pi * pi;
  for (let i = k + 1; i < n; i++) {
    const ar = re[i * n + k]!;
    const ai = im[i * n + k]!;
    if (ar === 0 && ai === 0) continue;
    const fr = (ar * pr + ai * pi) / d;
    const fi = (ai * pr - ar * pi) / d;
    re[i * n + k] = fr;
    im[i * n + k] = fi;
    for (let j = k + 1; j < n; j++) {
      const ur = re[k * n + j]!;
      const ui = im[k * n + j]!;
      re[i * n + j] = re[i * n + j]! - (fr * ur - fi * ui);
      im[i * n + j] = im[i * n + j]! - (fr * ui + fi * ur);
    }
  }
}

/** Solves A·x = b in place (b given as real and imaginary parts). */
export function complexLuSolve(lu: ComplexLu, br: Float64Array, bi: Float64Array): void {
  const { n, re, im, pivots } = lu;
  for (let k = 0; k < n; k++) {
    const row = pivots[k]!;
    if (row !== k) {
      const hr = br[k]!;
      const hi = bi[k]!;
      br[k] = br[row]!;
      bi[k] = bi[row]!;
      br[row] = hr;
      bi[row] = hi;
    }
  }
  for (let i = 1; i < n; i++) subtractRow(re, im, n, i, 0, i, br, bi);
  for (let i = n - 1; i >= 0; i--) {
    subtractRow(re, im, n, i, i + 1, n, br, bi);
    divide(br, bi, i, re[i * n + i]!, im[i * n + i]!);
  }
}

/** Solves Aᴴ·x = b in place, with the factors of A: Uᴴ y = b, Lᴴ w = y, x = Pᵀ w. */
export function complexLuSolveAdjoint(lu: ComplexLu, br: Float64Array, bi: Float64Array): void {
  const { n, re, im, pivots } = lu;
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < i; j++) subtractConjugate(re, im, j * n + i, br, bi, i, j);
    divide(br, bi, i, re[i * n + i]!, -im[i * n + i]!);
  }
  for (let i = n - 2; i >= 0; i--) {
    for (let j = i + 1; j < n; j++) subtractConjugate(re, im, j * n + i, br, bi, i, j);
  }
  for (let k = n - 1; k >= 0; k--) {
    const row = pivots[k]!;
    if (row !== k) {
      const hr = br[k]!;
      const hi = bi[k]!;
      br[k] = br[row]!;
      bi[k] = bi[row]!;
      br[row] = hr;
      bi[row] = hi;
    }
  }
}

function subtractRow(
  re: Float64Array,
  im: Float64Array,
  n: number,
  i: number,
  from: number,
  to: number,
  br: Float64Array,
  bi: Float64Array,
): void {
  let sr = br[i]!;
  let si = bi[i]!;
  for (let j = from; j < to; j++) {
    const ar = re[i * n + j]!;
    const ai = im[i * n + j]!;
    sr -= ar * br[j]! - ai * bi[j]!;
    si -= ar * bi[j]! + ai * br[j]!;
  }
  br[i] = sr;
  bi[i] = si;
}

function subtractConjugate(
  re: Float64Array,
  im: Float64Array,
  at: number,
  br: Float64Array,
  bi: Float64Array,
  i: number,
  j: number,
): void {
  const ar = re[at]!;
  const ai = -im[at]!;
  br[i] = br[i]! - (ar * br[j]! - ai * bi[j]!);
  bi[i] = bi[i]! - (ar * bi[j]! + ai * br[j]!);
}

function divide(br: Float64Array, bi: Float64Array, i: number, dr: number, di: number): void {
  const d = dr * dr + di * di;
  const r = br[i]!;
  const s = bi[i]!;
  br[i] = (r * dr + s * di) / d;
  bi[i] = (s * dr - r * di) / d;
}
