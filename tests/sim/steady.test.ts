import { describe, expect, it } from 'vitest';
import type { CompiledSystem } from '@/lib/sim/equations/types';
import { complexLuFactor } from '@/lib/sim/linalg/complex-lu';
import { Characteristic, characteristicMatrix } from '@/lib/sim/steady/characteristic';
import { settle } from '@/lib/sim/steady/flow';
import { newton } from '@/lib/sim/steady/newton';
import { Problem } from '@/lib/sim/steady/problem';
import { spectrum } from '@/lib/sim/steady/spectrum';

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

/** x' = A x + Σ B_k x(t − τ_k), hand-made; `blocks` holds [A | B₁ | … ] row-major. */
function linear(n: number, blocks: Float64Array, tau: number[]): CompiledSystem {
  const width = n * (tau.length + 1);
  const zero = (_z: unknown, _p: unknown, ...rest: unknown[]) => {
    (rest[rest.length - 1] as Float64Array).fill(0);
  };
  return {
    n,
    m: 1,
    K: tau.length,
    variables: Array.from({ length: n }, (_, i) => `x${i}`),
    parameters: ['c'],
    readouts: [],
    start: new Float64Array(n),
    values: new Float64Array(1),
    nonnegative: Array.from({ length: n }, () => false),
    parameterIndex: (s) => (s === 'c' ? 0 : -1),
    delays: (_p, out) => out.set(tau),
    rhs: (z, _p, out) => {
      for (let i = 0; i < n; i++) {
        out[i] = 0;
        for (let j = 0; j < width; j++) out[i] = out[i]! + blocks[i * width + j]! * z[j]!;
      }
    },
    jacobian: (_z, _p, out) => out.set(blocks),
    parameterDerivative: zero,
    delayDerivative: (_p, _j, out) => out.fill(0),
    second: zero,
    third: zero,
    jacobianParameter: zero,
    readout: zero,
  };
}

/**
 * Unstable roots by the argument principle: turns of det Δ around the right half disc of radius R, which
 * holds them all. Walked in steps short enough that the argument never moves by more than half a radian.
 */
function windingCount(problem: Problem, radius: number): number {
  const n = problem.n;
  const argument = (re: number, im: number) => {
    const a = new Float64Array(n * n);
    const b = new Float64Array(n * n);
    characteristicMatrix(problem, re, im, a, b, n);
    const lu = complexLuFactor(a, b, n);
    let sum = 0;
    for (let i = 0; i < n; i++) {
      sum += Math.atan2(lu.im[i * n + i]!, lu.re[i * n + i]!);
      if (lu.pivots[i] !== i) sum += Math.PI;
    }
    return sum;
  };
  const path = (s: number): [number, number] =>
    s < 1
      ? [0, radius * (1 - 2 * s)]
      : [
          radius * Math.cos(-Math.PI / 2 + (s - 1) * Math.PI),
          radius * Math.sin(-Math.PI / 2 + (s - 1) * Math.PI),
        ];
  let turns = 0;
  let at = 0;
  let last = argument(...path(0));
  let h = 1e-3;
  while (at < 2) {
    const next = Math.min(2, at + h);
    const value = argument(...path(next));
    const moved = Math.atan2(Math.sin(value - last), Math.cos(value - last));
    if (Math.abs(moved) > 0.5 && h > 1e-9) {
      h /= 2;
      continue;
    }
    turns += moved;
    last = value;
    at = next;
    h = Math.min(2e-3, h * 1.5);
  }
  // The path runs down the axis and back round the right: counter-clockwise.
  return Math.round(turns / (2 * Math.PI)) + 0;
}

describe('characteristic roots', () => {
  it('counts unstable roots as the argument principle does (Stépán 1989), delays short and long', () => {
    let unstable = 0;
    for (let seed = 1; seed <= 40; seed++) {
      const rnd = seeded(seed);
      const n = 1 + (seed % 3);
      const delays = 1 + (seed % 4 === 0 ? 2 : seed % 2);
      const tau = Array.from({ length: delays }, () => 10 ** (1.3 * rnd()));
      if (seed % 5 === 0) tau[0] = 0;
      const blocks = Float64Array.from({ length: n * n * (delays + 1) }, () => 1.5 * rnd());
      for (let i = 0; i < n; i++) {
        const at = i * n * (delays + 1) + i;
        blocks[at] = blocks[at]! - 1;
      }
      const problem = new Problem(linear(n, blocks, tau), new Float64Array(1), 0);
      problem.linearise(new Float64Array(n), 0);
      const found = spectrum(problem, new Characteristic(problem), new Float64Array(n).fill(1));
      expect(found.outcome).toBe('ok');
      const radius = 1.01 * n * (delays + 1) * 2.5;
      expect([seed, found.unstable]).toEqual([seed, windingCount(problem, radius)]);
      unstable += found.unstable;
    }
    expect(unstable).toBeGreaterThan(40);
  });

  it('the leading root of a scalar delay equation solves its equation to rounding', () => {
    for (const [a, b, tau] of [
      [-1, -2, 1],
      [0, -1, Math.PI / 2],
      [-1, 0.95, 20],
      [0.2, -0.5, 1e-6],
      [-3, 2.9, 40],
    ] as const) {
      const problem = new Problem(linear(1, Float64Array.of(a, b), [tau]), new Float64Array(1), 0);
      problem.linearise(new Float64Array(1), 0);
      const { roots } = spectrum(problem, new Characteristic(problem), Float64Array.of(1));
      const { re, im } = roots[0]!;
      const e = Math.exp(-re * tau);
      expect(Math.abs(re - a - b * e * Math.cos(im * tau))).toBeLessThan(2e-14 * (1 + Math.abs(b)));
      expect(Math.abs(im + b * e * Math.sin(im * tau))).toBeLessThan(2e-14 * (1 + Math.abs(b)));
    }
  });

  it('a delay of zero is an ordinary system', () => {
    const blocks = Float64Array.of(0, 1, 0, 0, -1, 0, -1, -0.5);
    const problem = new Problem(linear(2, blocks, [0]), new Float64Array(1), 0);
    problem.linearise(new Float64Array(2), 0);
    const { roots } = spectrum(problem, new Characteristic(problem), Float64Array.of(1, 1));
    // λ² + λ/2 + 2 = 0
    expect(roots).toHaveLength(1);
    expect(roots[0]!.re).toBeCloseTo(-0.25, 14);
    expect(roots[0]!.im).toBeCloseTo(Math.sqrt(2 - 1 / 16), 14);
  });
});

/** One equation f(x) with its derivative. */
function scalar(
  f: (x: number) => number,
  df: (x: number) => number,
  start: number,
  nonnegative = false,
): CompiledSystem {
  return {
    ...linear(1, Float64Array.of(0), []),
    start: Float64Array.of(start),
    nonnegative: [nonnegative],
    rhs: (z, _p, out) => {
      out[0] = f(z[0]!);
    },
    jacobian: (z, _p, out) => {
      out[0] = df(z[0]!);
    },
  };
}

describe('steady states', () => {
  it('Newton reaches the root in any unit', () => {
    for (const unit of [1e-12, 1, 1e12]) {
      const system = scalar(
        (x) => unit - x - x * (x / unit) ** 2,
        (x) => -1 - 3 * (x / unit) ** 2,
        40 * unit,
      );
      const x = Float64Array.from(system.start);
      const problem = new Problem(system, new Float64Array(1), 0);
      expect(newton(problem, x, 0, new Float64Array(1))).toBe('converged');
      expect(x[0]! / unit).toBeCloseTo(0.6823278038280193, 13);
    }
  });

  it('says no-convergence, never a false root, where there is none', () => {
    for (const start of [0.1, 3, -1e6]) {
      const system = scalar(
        (x) => 1 + x * x,
        (x) => 2 * x,
        start,
      );
      const x = Float64Array.from(system.start);
      const outcome = newton(new Problem(system, new Float64Array(1), 0), x, 0, Float64Array.of(1));
      expect(['no-convergence', 'singular']).toContain(outcome);
    }
  });

  it('the flow settles on the stable side of a threshold, not on the nearest root', () => {
    // Roots 0, 0.3 (unstable), 1.
    const make = (start: number) =>
      scalar(
        (x) => -x * (x - 0.3) * (x - 1),
        (x) => -(3 * x * x - 2.6 * x + 0.3),
        start,
        true,
      );
    for (const [start, end] of [
      [0.31, 1],
      [0.29, 0],
      [50, 1],
    ] as const) {
      const system = make(start);
      const problem = new Problem(system, new Float64Array(1), 0);
      const result = settle(problem, system.start, 0, Float64Array.of(1));
      expect(result.outcome).toBe('settled');
      expect(Math.abs(result.x[0]! - end)).toBeLessThan(1e-10);
    }
  });

  it('a flow that runs away is told from one that settles', () => {
    const system = scalar(
      (x) => x,
      () => 1,
      1,
    );
    const problem = new Problem(system, new Float64Array(1), 0);
    expect(settle(problem, system.start, 0, new Float64Array(1)).outcome).not.toBe('settled');
  });
});
