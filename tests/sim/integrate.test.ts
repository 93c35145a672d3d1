import { describe, expect, it } from 'vitest';
import { EngineError } from '@/lib/contracts/common';
import type { SystemModel } from '@/lib/contracts/model';
import { compileModel } from '@/lib/sim/equations/compile';
import { breakPoints } from '@/lib/sim/integrate/break-points';
import { Course } from '@/lib/sim/integrate/course';
import { simulate } from '@/lib/sim/integrate/simulate';

function model(
  equations: Record<string, string>,
  start: Record<string, number>,
  parameters: Record<string, number> = {},
): SystemModel {
  return {
    name: 'test',
    timeUnit: 's',
    variables: Object.keys(equations).map((symbol) => ({ symbol, start: start[symbol] ?? 0 })),
    parameters: Object.entries(parameters).map(([symbol, value]) => ({ symbol, value })),
    equations,
  };
}
const run = (m: SystemModel, until: number, every: number, set: Record<string, number> = {}) =>
  simulate({ model: m, set, until, every, noise: false, seed: 1 });

/** Largest deviation from the exact course, over the largest value of it. */
function worst(times: number[], got: number[], exact: (t: number) => number): number {
  const scale = Math.max(...times.map((t) => Math.abs(exact(t))));
  return Math.max(...times.map((t, i) => Math.abs(got[i]! - exact(t)))) / scale;
}

describe('courses without delay against exact solutions', () => {
  it('harmonic motion over a hundred cycles', () => {
    const { times, readouts } = run(
      model({ x: 'v', v: '-w^2*x' }, { x: 1 }, { w: 2 * Math.PI }),
      100,
      0.05,
    );
    expect(times).toHaveLength(2001);
    expect(worst(times, readouts.x!, (t) => Math.cos(2 * Math.PI * t))).toBeLessThan(1e-7);
  });

  it.each([
    [1, 1],
    [1e-9, 1],
    [1e9, 1],
    [1, 1e-9],
    [1, 1e9],
    [1e-9, 1e9],
  ])('logistic growth in units %d and at rate %d', (unit, rate) => {
    const m = model({ x: 'r*x*(1 - x/K)' }, { x: 0.1 * unit }, { r: rate, K: unit });
    const { times, readouts } = run(m, 20 / rate, 0.5 / rate);
    const exact = (t: number) => unit / (1 + 9 * Math.exp(-rate * t));
    expect(times).toHaveLength(41);
    expect(worst(times, readouts.x!, exact)).toBeLessThan(1e-8);
  });

  it('a rate of 1e3 beside a rate of 1', () => {
    const m = model({ a: '-1000*(a - b)', b: '-b' }, { a: 0, b: 1 });
    const { times, readouts } = run(m, 5, 0.1);
    const exact = (t: number) => (1000 / 999) * (Math.exp(-t) - Math.exp(-1000 * t));
    expect(worst(times, readouts.a!, exact)).toBeLessThan(1e-8);
  });

  it('a rate of 1e6 beside a rate of 1, by implicit steps', () => {
    const m = model({ a: '-k*(a - cos(b))', b: '1', c: 'a' }, {}, { k: 1e6 });
    const { times, readouts } = run(m, 20, 0.1);
    const exact = (t: number) => Math.cos(t) + 1e-6 * Math.sin(t);
    const late = times.slice(1);
    expect(worst(late, readouts.a!.slice(1), exact)).toBeLessThan(1e-8);
    expect(worst(times, readouts.c!, Math.sin)).toBeLessThan(2e-6);
    const system = compileModel(m);
    const course = new Course(system, system.values, system.start, { maxSteps: 20_000 });
    // The explicit pair alone would need 20 · 1e6/3.3 steps.
    expect(course.advance(20).outcome).toBe('reached');
  });

  it('the stiff chemical test problem of Robertson at t = 40', () => {
    // 7.158270e-01, 9.185535e-06, 2.841638e-01: the example output in the CVODE manual (from memory);
    // the problem is Robertson 1966, as in Hairer & Wanner 1996, IV.10.
    const m = model(
      { a: '-0.04*a + 1e4*b*c', b: '0.04*a - 1e4*b*c - 3e7*b^2', c: '3e7*b^2' },
      { a: 1 },
    );
    const { readouts } = run(m, 40, 40);
    expect(readouts.a![1]).toBeCloseTo(0.715827, 6);
    expect(readouts.b![1]! * 1e6).toBeCloseTo(9.185535, 5);
    expect(readouts.c![1]).toBeCloseTo(0.2841638, 6);
  });

  it('goes through a removable 0/0 of a rate function, also when it starts there', () => {
    // x/(1 − exp(−x)) − x/2 − 1 is even and 0 at 0; beside it x′ = 1 decides.
    const m = model({ x: '1', y: 'x/(1 - exp(-x)) - x/2' }, {});
    const { readouts } = run(m, 1, 1);
    // ∫ x/2 · coth(x/2) from 0 to 1 = 1 + 1/36 − 1/3600 + 1/211680 − …, the series of Bernoulli numbers.
    expect(readouts.y![1]).toBeCloseTo(1 + 1 / 36 - 1 / 3600 + 1 / 211680 - 1 / 10886400, 7);
  });

  it('conserves the energy of a pendulum with large swings', () => {
    const { readouts } = run(model({ x: 'v', v: '-sin(x)' }, { x: 2.5 }), 200, 1);
    readouts.x!.forEach((x, i) => {
      const energy = readouts.v![i]! ** 2 / 2 - Math.cos(x);
      expect(Math.abs(energy + Math.cos(2.5))).toBeLessThan(1e-7);
    });
  });

  it('keeps a real exponent finite where rounding takes a nonnegative variable below zero', () => {
    const m = model({ x: '-x^0.5' }, { x: 1 });
    m.variables[0]!.nonnegative = true;
    const { times, readouts } = run(m, 1.9, 0.1);
    expect(worst(times, readouts.x!, (t) => (1 - t / 2) ** 2)).toBeLessThan(1e-8);
  });
});

describe('courses with delay against exact solutions', () => {
  it('x′ = −x(t − 1) piece by piece (method of steps, polynomials)', () => {
    const m = model({ x: '-x(t - tau)' }, { x: 1 }, { tau: 1 });
    const { times, readouts } = run(m, 6, 0.125);
    // Σ over k of (−1)^k (t − k + 1)^k / k!, the classical series for constant history 1.
    const exact = (t: number) => {
      let sum = 1;
      let factorial = 1;
      for (let k = 1; t - k + 1 > 0; k += 1) {
        factorial *= k;
        sum += ((-1) ** k * (t - k + 1) ** k) / factorial;
      }
      return sum;
    };
    expect(worst(times, readouts.x!, exact)).toBeLessThan(1e-9);
  });

  it('a delay of zero is the present state, also where a parameter makes it zero', () => {
    const m = model({ x: '-x(t - tau)' }, { x: 1 }, { tau: 1 });
    const { times, readouts } = run(m, 5, 0.5, { tau: 0 });
    expect(worst(times, readouts.x!, (t) => Math.exp(-t))).toBeLessThan(1e-9);
  });

  it('a delay much shorter than the course', () => {
    // x′ = −x(t − τ) tends to exp(λt) with λ = −exp(−λτ); for small τ the history matters as τ² alone.
    const tau = 1e-4;
    let lambda = -1;
    for (let i = 0; i < 50; i += 1) lambda = -Math.exp(-lambda * tau);
    const m = model({ x: '-x(t - tau)' }, { x: 1 }, { tau });
    const { readouts } = run(m, 10, 1);
    for (let i = 2; i < 10; i += 1) {
      expect(Math.abs(readouts.x![i]! / readouts.x![i - 1]! / Math.exp(lambda) - 1)).toBeLessThan(
        1e-8,
      );
    }
  });

  it('a neutral rhythm x′ = −(π/2) x(t − 1) keeps period 4 and amplitude', () => {
    const m = model({ x: '-k*x(t - tau)' }, { x: 1 }, { k: Math.PI / 2, tau: 1 });
    const { readouts } = run(m, 400, 1);
    for (let i = 60; i + 4 <= 400; i += 1) {
      expect(Math.abs(readouts.x![i + 4]! - readouts.x![i]!)).toBeLessThan(1e-8);
    }
  });

  it('two delays whose pieces are known: x′ = −x(t − 1) − x(t − √2)', () => {
    const m = model({ x: '-x(t - a) - x(t - b)' }, { x: 1 }, { a: 1, b: Math.SQRT2 });
    const { times, readouts } = run(m, 2, 0.1);
    const ramp = (s: number) => Math.max(0, s);
    const exact = (t: number) => 1 - 2 * t + ramp(t - 1) ** 2 + ramp(t - Math.SQRT2) ** 2;
    expect(worst(times, readouts.x!, exact)).toBeLessThan(1e-9);
  });

  it('is the same in other units of time and state', () => {
    const equations = { x: 'b*S*(x(t - tau)/S)/(1 + (x(t - tau)/S)^10) - g*x' };
    const base = run(model(equations, { x: 0.5 }, { b: 0.2, g: 0.1, S: 1, tau: 10 }), 300, 5);
    const small = run(
      model(equations, { x: 0.5e-9 }, { b: 0.2e9, g: 0.1e9, S: 1e-9, tau: 1e-8 }),
      300e-9,
      5e-9,
    );
    base.readouts.x!.forEach((x, i) => {
      expect(Math.abs(small.readouts.x![i]! * 1e9 - x)).toBeLessThan(1e-6);
    });
  });

  it('meets break points at sums of delays up to the order', () => {
    expect(breakPoints([1, 2.5, 0], 10, 2)).toEqual([11, 12, 12.5, 13.5, 15]);
    expect(breakPoints([], 0, 5)).toEqual([]);
    expect(breakPoints([0.1, 0.2], 0, 5)).toHaveLength(10);
  });
});

describe('what a course reports', () => {
  const failure = (work: () => unknown): EngineError => {
    try {
      work();
    } catch (error) {
      if (error instanceof EngineError) return error;
      throw error;
    }
    throw new Error('no error');
  };

  it('says which variable leaves the finite range, and when', () => {
    const error = failure(() => run(model({ y: '-y', x: 'x^2' }, { x: 1, y: 1 }), 2, 0.1));
    expect(error.code).toBe('limit-exceeded');
    expect(error.message).toMatch(/^x leaves the finite range at time 1:/);
    const growth = failure(() => run(model({ x: 'x*x*x + x' }, { x: 10 }), 2, 0.1));
    expect(growth.code).toBe('limit-exceeded');
  });

  it('refuses unknown symbols and negative delays with the field to mend', () => {
    const m = model({ x: '-x(t - tau)' }, { x: 1 }, { tau: 1 });
    expect(failure(() => run(m, 1, 1, { q: 1 }))).toMatchObject({
      code: 'invalid-request',
      at: 'set.q',
    });
    expect(failure(() => run(m, 1, 1, { tau: -1 })).code).toBe('invalid-request');
    expect(
      failure(() =>
        simulate({ model: m, set: {}, until: 1, every: 1, noise: false, seed: 1, from: { y: 1 } }),
      ),
    ).toMatchObject({ code: 'invalid-request', at: 'from.y' });
    expect(failure(() => run(m, 1e7, 1)).code).toBe('limit-exceeded');
    expect(failure(() => run(model({ x: '2y' }, {}), 1, 1))).toMatchObject({
      code: 'invalid-equation',
      at: 'model.equations.x',
    });
  });

  it('stops after its allowance of steps instead of running on', () => {
    const system = compileModel(model({ x: '-1e9*x(t - s)', y: '1' }, { x: 1 }, { s: 1e-10 }));
    const course = new Course(system, system.values, system.start, { maxSteps: 1000 });
    expect(course.advance(1e3).outcome).toBe('too-many-steps');
  });

  it('samples 0, every, 2·every … and a last time that rounding puts past the end', () => {
    const { times } = run(model({ x: '1' }, {}), 0.3, 0.1);
    expect(times).toEqual([0, 0.1, 0.2, 3 * 0.1]);
    expect(run(model({ x: '1' }, {}), 0.35, 0.1).times).toHaveLength(4);
    expect(run(model({ x: '1' }, {}), 0.05, 0.1).times).toEqual([0]);
  });

  it('adds seeded noise of the size asked for, and none by default', () => {
    const m = model({ x: '0' }, { x: 5 });
    m.readouts = [
      { symbol: 'quiet', expression: 'x' },
      { symbol: 'noisy', expression: '2*x', noiseSd: 0.5 },
    ];
    const draw = (seed: number) =>
      simulate({ model: m, set: {}, until: 4000, every: 1, noise: true, seed }).readouts;
    const first = draw(3);
    expect(first).toEqual(draw(3));
    expect(first.noisy).not.toEqual(draw(4).noisy);
    expect(new Set(first.quiet)).toEqual(new Set([5]));
    const mean = first.noisy!.reduce((s, x) => s + x, 0) / 4001;
    const variance = first.noisy!.reduce((s, x) => s + (x - mean) ** 2, 0) / 4000;
    expect(Math.abs(mean - 10)).toBeLessThan((5 * 0.5) / Math.sqrt(4001));
    expect(Math.abs(variance - 0.25)).toBeLessThan(5 * 0.25 * Math.sqrt(2 / 4000));
  });
});
