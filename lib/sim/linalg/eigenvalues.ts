import { balance } from './balance';

/** Eigenvalues of a real matrix; complex ones come in conjugate pairs. */
export interface Eigenvalues {
  readonly outcome: 'ok' | 'no-convergence' | 'not-finite';
  readonly re: Float64Array;
  readonly im: Float64Array;
  /** 1-norm of the balanced matrix: rounding errors are a small multiple of ε times this. */
  readonly norm: number;
}

/**
 * All eigenvalues of `a` (n × n, row-major; destroyed): balancing, reduction to Hessenberg form by
 * elimination, double-shift QR (Martin, Peters & Wilkinson 1970). At most 60 sweeps an eigenvalue.
 */
export function eigenvalues(a: Float64Array, n: number): Eigenvalues {
  const re = new Float64Array(n);
  const im = new Float64Array(n);
  for (let i = 0; i < n * n; i++) {
    if (!Number.isFinite(a[i]!)) return { outcome: 'not-finite', re, im, norm: 0 };
  }
  if (n === 1) {
    re[0] = a[0]!;
    return { outcome: 'ok', re, im, norm: Math.abs(a[0]!) };
  }
  balance(a, n);
  let norm = 0;
  for (let j = 0; j < n; j++) {
    let sum = 0;
    for (let i = 0; i < n; i++) sum += Math.abs(a[i * n + j]!);
    norm = Math.max(norm, sum);
  }
  if (n === 2) {
    twoByTwo(a[0]!, a[1]!, a[2]!, a[3]!, re, im, 0, 0);
    return { outcome: 'ok', re, im, norm };
  }
  toHessenberg(a, n);
  return { outcome: hessenbergQr(a, n, re, im) ? 'ok' : 'no-convergence', re, im, norm };
}

/** Reduction to upper Hessenberg form by stabilised elementary similarity transformations. */
function toHessenberg(a: Float64Array, n: number): void {
  for (let m = 1; m < n - 1; m++) {
    let pivot = 0;
    let row = m;
    for (let i = m; i < n; i++) {
      if (Math.abs(a[i * n + m - 1]!) > Math.abs(pivot)) {
        pivot = a[i * n + m - 1]!;
        row = i;
      }
    }
    if (pivot === 0) continue;
    if (row !== m) {
      for (let j = m - 1; j < n; j++) swap(a, row * n + j, m * n + j);
      for (let i = 0; i < n; i++) swap(a, i * n + row, i * n + m);
    }
    for (let i = m + 1; i < n; i++) {
      const factor = a[i * n + m - 1]! / pivot;
      if (factor === 0) continue;
      a[i * n + m - 1] = 0;
      for (let j = m; j < n; j++) a[i * n + j] = a[i * n + j]! - factor * a[m * n + j]!;
      for (let j = 0; j < n; j++) a[j * n + m] = a[j * n + m]! + factor * a[j * n + i]!;
    }
  }
  for (let i = 2; i < n; i++) for (let j = 0; j < i - 1; j++) a[i * n + j] = 0;
}

function swap(a: Float64Array, i: number, j: number): void {
  const held = a[i]!;
  a[i] = a[j]!;
  a[j] = held;
}

/** Eigenvalues of [[p, q], [r, s]] + shift, without cancellation in the smaller real one. */
function twoByTwo(
  p: number,
  q: number,
  r: number,
  s: number,
  re: Float64Array,
  im: Float64Array,
  at: number,
  shift: number,
): void {
  const half = (p - s) / 2;
  const product = q * r;
  const disc = half * half + product;
  if (disc < 0) {
    re[at] = re[at + 1] = (p + s) / 2 + shift;
    im[at] = Math.sqrt(-disc);
    im[at + 1] = -im[at]!;
    return;
  }
  const z = half + (half >= 0 ? Math.sqrt(disc) : -Math.sqrt(disc));
  re[at] = s + z + shift;
  re[at + 1] = (z !== 0 ? s - product / z : s) + shift;
  im[at] = im[at + 1] = 0;
}

/** Row below which the active block starts: the first negligible subdiagonal entry looking upwards. */
function blockStart(a: Float64Array, n: number, end: number, norm: number): number {
  let l = end;
  for (; l >= 1; l--) {
    const size = Math.abs(a[(l - 1) * n + l - 1]!) + Math.abs(a[l * n + l]!) || norm;
    if (Math.abs(a[l * n + l - 1]!) <= 2.22e-16 * size) {
      a[l * n + l - 1] = 0;
      break;
    }
  }
  return Math.max(l, 0);
}

function hessenbergQr(a: Float64Array, n: number, re: Float64Array, im: Float64Array): boolean {
  let norm = 0;
  for (let i = 0; i < n; i++) {
    for (let j = Math.max(i - 1, 0); j < n; j++) norm += Math.abs(a[i * n + j]!);
  }
  let end = n - 1;
  let shift = 0;
  let sweeps = 0;
  while (end >= 0) {
    const l = blockStart(a, n, end, norm);
    if (l === end) {
      re[end] = a[end * n + end]! + shift;
      im[end] = 0;
      end -= 1;
      sweeps = 0;
    } else if (l === end - 1) {
      const top = (end - 1) * n + end - 1;
      const low = end * n + end - 1;
      twoByTwo(a[top]!, a[top + 1]!, a[low]!, a[low + 1]!, re, im, end - 1, shift);
      end -= 2;
      sweeps = 0;
    } else {
      if (sweeps === 60) return false;
      if (sweeps === 10 || sweeps === 20 || sweeps === 40) {
        const x = a[end * n + end]!;
        shift += x;
        for (let i = 0; i <= end; i++) a[i * n + i] = a[i * n + i]! - x;
      }
      doubleShiftSweep(a, n, l, end, sweeps % 10 === 0 && sweeps > 0);
      sweeps += 1;
    }
  }
  return true;
}

/** One Francis double-shift sweep on rows l..end; `exceptional` uses ad hoc shifts against cycling. */
function doubleShiftSweep(
  a: Float64Array,
  n: number,
  l: number,
  end: number,
  exceptional: boolean,
): void {
  let x = a[end * n + end]!;
  let y = a[(end - 1) * n + end - 1]!;
  let w = a[end * n + end - 1]! * a[(end - 1) * n + end]!;
  if (exceptional) {
    const s = Math.abs(a[end * n + end - 1]!) + Math.abs(a[(end - 1) * n + end - 2]!);
    x = y = 0.75 * s;
    w = -0.4375 * s * s;
  }
  let p = 0;
  let q = 0;
  let r = 0;
  let m = end - 2;
  for (; m >= l; m--) {
    const z = a[m * n + m]!;
    const rr = x - z;
    const ss = y - z;
    p = (rr * ss - w) / a[(m + 1) * n + m]! + a[m * n + m + 1]!;
    q = a[(m + 1) * n + m + 1]! - z - rr - ss;
    r = a[(m + 2) * n + m + 1]!;
    const s = Math.abs(p) + Math.abs(q) + Math.abs(r);
    p /= s;
    q /= s;
    r /= s;
    if (m === l) break;
    const u = Math.abs(a[m * n + m - 1]!) * (Math.abs(q) + Math.abs(r));
    const v =
      Math.abs(p) *
      (Math.abs(a[(m - 1) * n + m - 1]!) + Math.abs(z) + Math.abs(a[(m + 1) * n + m + 1]!));
    if (u <= 2.22e-16 * v) break;
  }
  for (let i = m + 2; i <= end; i++) {
    a[i * n + i - 2] = 0;
    if (i !== m + 2) a[i * n + i - 3] = 0;
  }
  chase(a, n, l, end, m, p, q, r);
}

/** Chases the bulge from row m to the end with Householder reflections of order three. */
function chase(
  a: Float64Array,
  n: number,
  l: number,
  end: number,
  m: number,
  p0: number,
  q0: number,
  r0: number,
): void {
  let p = p0;
  let q = q0;
  let r = r0;
  for (let k = m; k < end; k++) {
    const three = k !== end - 1;
    let x = 0;
    if (k !== m) {
      p = a[k * n + k - 1]!;
      q = a[(k + 1) * n + k - 1]!;
      r = three ? a[(k + 2) * n + k - 1]! : 0;
      x = Math.abs(p) + Math.abs(q) + Math.abs(r);
      if (x === 0) continue;
      p /= x;
      q /= x;
      r /= x;
    }
    const size = Math.sqrt(p * p + q * q + r * r);
    const s = p >= 0 ? size : -size;
    if (s === 0) continue;
    if (k === m) {
      if (l !== m) a[k * n + k - 1] = -a[k * n + k - 1]!;
    } else a[k * n + k - 1] = -s * x;
    p += s;
    x = p / s;
    const y = q / s;
    const z = r / s;
    q /= p;
    r /= p;
    reflect(a, n, k, l, end, three, [x, y, z, q, r]);
  }
}

/** Applies one reflection from the left to columns k..end and from the right to rows l..k + 3. */
function reflect(
  a: Float64Array,
  n: number,
  k: number,
  l: number,
  end: number,
  three: boolean,
  [x, y, z, q, r]: readonly [number, number, number, number, number],
): void {
  for (let j = k; j <= end; j++) {
    let t = a[k * n + j]! + q * a[(k + 1) * n + j]!;
    if (three) {
      t += r * a[(k + 2) * n + j]!;
      a[(k + 2) * n + j] = a[(k + 2) * n + j]! - t * z;
    }
    a[(k + 1) * n + j] = a[(k + 1) * n + j]! - t * y;
    a[k * n + j] = a[k * n + j]! - t * x;
  }
  const last = Math.min(end, k + 3);
  for (let i = l; i <= last; i++) {
    let t = x * a[i * n + k]! + y * a[i * n + k + 1]!;
    if (three) {
      t += z * a[i * n + k + 2]!;
      a[i * n + k + 2] = a[i * n + k + 2]! - t * r;
    }
    a[i * n + k + 1] = a[i * n + k + 1]! - t * q;
    a[i * n + k] = a[i * n + k]! - t;
  }
}
