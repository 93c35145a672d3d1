import { describe, expect, it } from 'vitest';
import { randomSource } from '@/lib/sim/random/generator';
import { evenPoints } from '@/lib/sim/random/low-discrepancy';
import { normalQuantile } from '@/lib/sim/random/normal-quantile';
import { spreadQuantile } from '@/lib/sim/random/spread';

describe('seeded random numbers', () => {
  it('repeat for the same seed and differ for another', () => {
    const draw = (seed: number) => {
      const random = randomSource(seed);
      return Array.from({ length: 5 }, () => random.uniform());
    };
    expect(draw(7)).toEqual(draw(7));
    expect(draw(7)).not.toEqual(draw(8));
    expect(draw(7)).not.toEqual(draw(7 + 2 ** 32));
  });

  it('have the moments of their distributions within five standard errors', () => {
    const random = randomSource(1);
    const N = 200_000;
    let [u1, u2, n1, n2, n4] = [0, 0, 0, 0, 0];
    for (let i = 0; i < N; i += 1) {
      const u = random.uniform();
      const n = random.normal();
      u1 += u / N;
      u2 += (u * u) / N;
      n1 += n / N;
      n2 += (n * n) / N;
      n4 += n ** 4 / N;
    }
    const error = 5 / Math.sqrt(N);
    expect(Math.abs(u1 - 1 / 2)).toBeLessThan(error * Math.sqrt(1 / 12));
    expect(Math.abs(u2 - 1 / 3)).toBeLessThan(error * Math.sqrt(4 / 45));
    expect(Math.abs(n1)).toBeLessThan(error);
    expect(Math.abs(n2 - 1)).toBeLessThan(error * Math.SQRT2);
    expect(Math.abs(n4 - 3)).toBeLessThan(error * Math.sqrt(96));
  });
});

describe('the normal quantile', () => {
  // Printed check values of Wichura 1988, table in AS 241, and the 97.5 % point of any normal table.
  it.each([
    [0.25, -0.6744897501960817],
    [0.001, -3.090232306167814],
    [1e-20, -9.262340089798409],
    [0.975, 1.959963984540054],
  ])('at %d is %d', (p, z) => {
    expect(Math.abs(normalQuantile(p) / z - 1)).toBeLessThan(2e-15);
  });

  it('is odd about a half, and a lognormal spread has its value as median', () => {
    expect(normalQuantile(0.5)).toBe(0);
    expect(normalQuantile(0.9)).toBeCloseTo(-normalQuantile(0.1), 14);
    expect(spreadQuantile(3, { kind: 'lognormal', cv: 0.4 }, 0.5)).toBe(3);
    const sigma = Math.sqrt(Math.log(1.16));
    const upper = spreadQuantile(3, { kind: 'lognormal', cv: 0.4 }, 0.975);
    expect(upper).toBeCloseTo(3 * Math.exp(1.959963984540054 * sigma), 12);
  });
});

describe('even points', () => {
  it('put exactly one of 2^k points into each of 2^k equal parts of every axis', () => {
    const points = evenPoints(256, 30, 5);
    for (let d = 0; d < 30; d += 1) {
      expect(new Set(points.map((x) => Math.floor(x[d]! * 256))).size).toBe(256);
    }
  });

  it('fill the first two axes as a (0, 8, 2)-net: one point in every box of area 1/256', () => {
    const points = evenPoints(256, 2, 9);
    for (let k = 0; k <= 8; k += 1) {
      const rows = 2 ** k;
      const boxes = points.map(
        (x) => `${Math.floor(x[0]! * rows)},${Math.floor((x[1]! * 256) / rows)}`,
      );
      expect(new Set(boxes).size).toBe(256);
    }
  });

  it('integrate a smooth function of eight coordinates far better than random points', () => {
    const f = (x: Float64Array) =>
      x.reduce((product, u, i) => product * (1 + (u - 0.5) / (1 + i)), 1);
    for (let seed = 1; seed <= 5; seed += 1) {
      const points = evenPoints(4096, 8, seed);
      const mean = points.reduce((sum, x) => sum + f(x) / 4096, 0);
      // Plain random points would have a standard error of 5e-3 here.
      expect(Math.abs(mean - 1)).toBeLessThan(5e-5);
    }
  });

  it('differ between seeds and stay inside the open cube', () => {
    expect(evenPoints(4, 2, 1)).not.toEqual(evenPoints(4, 2, 2));
    for (const x of evenPoints(1000, 25, 3)) for (const u of x) expect(u > 0 && u < 1).toBe(true);
  });
});
