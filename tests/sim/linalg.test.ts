import { describe, expect, it } from 'vitest';
import {
  complexLuFactor,
  complexLuSolve,
  complexLuSolveAdjoint,
} from '@/lib/sim/linalg/complex-lu';
import { eigenvalues } from '@/lib/sim/linalg/eigenvalues';
import { luFactor, luSolve } from '@/lib/sim/linalg/lu';

/** Seeded uniform numbers in (−1, 1): a 32-bit xorshift (Marsaglia 2003). */
function seeded(seed: number) {
  let s = (seed * 2654435761) >>> 0 || 1;
  return () => {
    s ^= s << 13;
    s >>>= 0;
    s ^= s >>> 17;
    s ^= s << 5;
    s >>>= 0;
    return (s / 4294967296) * 2 - 1;
  };
}
const matrix = (n: number, seed: number) => Float64Array.from({ length: n * n }, seeded(seed));

/** |det(A − λI)|^(1/n) relative to the matrix's size, by complex LU: small at an eigenvalue. */
function closeness(a: Float64Array, n: number, re: number, im: number): number {
  const mr = Float64Array.from(a);
  const mi = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    mr[i * n + i] = mr[i * n + i]! - re;
    mi[i * n + i] = -im;
  }
  const lu = complexLuFactor(mr, mi, n);
  if (lu.outcome === 'singular') return 0;
  const br = Float64Array.from({ length: n }, seeded(7));
  const bi = new Float64Array(n);
  complexLuSolve(lu, br, bi);
  return 1 / Math.hypot(...br, ...bi);
}

describe('linear algebra', () => {
  it('solves A·x = b to rounding, and so with rows and columns rescaled by 10^±9', () => {
    for (let seed = 1; seed <= 20; seed++) {
      const n = 1 + (seed % 12);
      const a = matrix(n, seed);
      const x = Float64Array.from({ length: n }, seeded(100 + seed));
      for (const [row, column] of [
        [1, 1],
        [1e9, 1e-9],
        [1e-9, 1e9],
      ] as const) {
        const scaled = a.map((v, k) => {
          const i = Math.floor(k / n);
          const j = k % n;
          return v * (i % 2 ? row : 1) * (j % 2 ? column : 1);
        });
        const b = new Float64Array(n);
        for (let i = 0; i < n; i++) {
          for (let j = 0; j < n; j++) b[i] = b[i]! + a[i * n + j]! * x[j]!;
          b[i] = b[i]! * (i % 2 ? row : 1);
        }
        const lu = luFactor(scaled, n);
        expect(lu.outcome).toBe('ok');
        luSolve(lu, b);
        for (let j = 0; j < n; j++) {
          expect(Math.abs(b[j]! * (j % 2 ? column : 1) - x[j]!)).toBeLessThan(1e-9);
        }
      }
    }
  });

  it('says singular for a matrix without inverse', () => {
    expect(luFactor(Float64Array.from([1, 2, 2, 4]), 2).outcome).toBe('singular');
    expect(luFactor(Float64Array.from([0, 0, 1, 4]), 2).outcome).toBe('singular');
    expect(luFactor(Float64Array.from([Number.NaN, 0, 1, 4]), 2).outcome).toBe('singular');
  });

  it('solves complex systems and their adjoints: ⟨u, A v⟩ = ⟨Aᴴ u, v⟩', () => {
    for (let seed = 1; seed <= 15; seed++) {
      const n = 2 + (seed % 7);
      const re = matrix(n, seed);
      const im = matrix(n, seed + 50);
      const lu = complexLuFactor(Float64Array.from(re), Float64Array.from(im), n);
      const rnd = seeded(seed + 99);
      const br = Float64Array.from({ length: n }, rnd);
      const bi = Float64Array.from({ length: n }, rnd);
      const vr = Float64Array.from(br);
      const vi = Float64Array.from(bi);
      complexLuSolve(lu, vr, vi);
      const ur = Float64Array.from(br);
      const ui = Float64Array.from(bi);
      complexLuSolveAdjoint(lu, ur, ui);
      for (let i = 0; i < n; i++) {
        let sr = 0;
        let si = 0;
        let tr = 0;
        let ti = 0;
        for (let j = 0; j < n; j++) {
          sr += re[i * n + j]! * vr[j]! - im[i * n + j]! * vi[j]!;
          si += re[i * n + j]! * vi[j]! + im[i * n + j]! * vr[j]!;
          tr += re[j * n + i]! * ur[j]! + im[j * n + i]! * ui[j]!;
          ti += re[j * n + i]! * ui[j]! - im[j * n + i]! * ur[j]!;
        }
        for (const [got, want] of [
          [sr, br[i]!],
          [si, bi[i]!],
          [tr, br[i]!],
          [ti, bi[i]!],
        ] as const) {
          expect(Math.abs(got - want)).toBeLessThan(1e-9);
        }
      }
    }
  });

  it('eigenvalues: trace, sum of squares and singularity of A − λI hold on seeded matrices', () => {
    for (let seed = 1; seed <= 30; seed++) {
      const n = 1 + (seed % 20);
      const a = matrix(n, seed);
      const e = eigenvalues(Float64Array.from(a), n);
      expect(e.outcome).toBe('ok');
      let trace = 0;
      let square = 0;
      for (let i = 0; i < n; i++) {
        trace += a[i * n + i]!;
        for (let j = 0; j < n; j++) square += a[i * n + j]! * a[j * n + i]!;
      }
      let sum = 0;
      let sumSquare = 0;
      let imaginary = 0;
      for (let i = 0; i < n; i++) {
        sum += e.re[i]!;
        imaginary += e.im[i]!;
        sumSquare += e.re[i]! ** 2 - e.im[i]! ** 2;
        expect(closeness(a, n, e.re[i]!, e.im[i]!)).toBeLessThan(1e-10);
      }
      expect(Math.abs(sum - trace)).toBeLessThan(1e-11 * n);
      expect(Math.abs(imaginary)).toBeLessThan(1e-13);
      expect(Math.abs(sumSquare - square)).toBeLessThan(1e-10 * n);
    }
  });

  it('eigenvalues do not change under a diagonal similarity of 10^±9', () => {
    for (let seed = 1; seed <= 10; seed++) {
      const n = 3 + (seed % 6);
      const a = matrix(n, seed);
      const d = Float64Array.from({ length: n }, (_, i) => 10 ** (((i * 7 + seed) % 19) - 9));
      const scaled = a.map((v, k) => (v * d[k % n]!) / d[Math.floor(k / n)]!);
      const sort = (e: ReturnType<typeof eigenvalues>) =>
        [...e.re].map((r, i) => [r, Math.abs(e.im[i]!)] as const).sort((p, q) => p[0] - q[0]);
      const one = sort(eigenvalues(Float64Array.from(a), n));
      const two = sort(eigenvalues(scaled, n));
      one.forEach((v, i) => {
        expect(Math.abs(v[0] - two[i]![0])).toBeLessThan(1e-11);
        expect(Math.abs(v[1] - two[i]![1])).toBeLessThan(1e-11);
      });
    }
  });

  it('finds the roots of unity from a companion matrix', () => {
    const n = 12;
    const a = new Float64Array(n * n);
    for (let i = 1; i < n; i++) a[i * n + i - 1] = 1;
    a[n - 1] = 1;
    const e = eigenvalues(a, n);
    for (let i = 0; i < n; i++) {
      expect(Math.hypot(e.re[i]!, e.im[i]!)).toBeCloseTo(1, 12);
      const turn = (Math.atan2(e.im[i]!, e.re[i]!) * n) / (2 * Math.PI);
      expect(Math.abs(turn - Math.round(turn))).toBeLessThan(1e-11);
    }
  });
});
