import { describe, expect, it } from 'vitest';
import { EngineError, predictAnswer, predictRequest } from '@/lib/contracts';
import { predict } from '@/lib/sim/predict';
import { ask, codes } from './predict-case';

const error = (run: () => unknown): EngineError => {
  try {
    run();
  } catch (e) {
    if (e instanceof EngineError) return e;
    throw e;
  }
  throw new Error('an error was expected');
};

describe('requests that cannot be answered', () => {
  it('a conserved quantity is named', () => {
    const e = error(() =>
      ask(
        { a: '-k*a + b', b: 'k*a - b' },
        { a: 1, b: 0 },
        { k: 1 },
        { symbol: 'k', from: 0.5, to: 2 },
      ),
    );
    expect(e.code).toBe('no-steady-state');
    expect(e.message).toContain('conserve');
  });

  it('a system without any steady state', () => {
    const e = error(() =>
      ask({ x: '1 + k*x^2' }, { x: 0 }, { k: 1 }, { symbol: 'k', from: 0.5, to: 2 }),
    );
    expect(e.code).toBe('no-steady-state');
  });

  it('a control that is no parameter, and a delay below zero', () => {
    const one = error(() =>
      ask({ x: '-k*x' }, { x: 1 }, { k: 1 }, { symbol: 'q', from: 0, to: 1 }),
    );
    expect([one.code, one.at]).toEqual(['invalid-request', 'control.symbol']);
    const two = error(() =>
      ask({ x: '-x(t - tau)' }, { x: 1 }, { tau: 1 }, { symbol: 'tau', from: -1, to: 1 }),
    );
    expect(two.code).toBe('invalid-request');
  });

  it('a poor guess is relaxed along the flow, and said so', () => {
    const answer = ask(
      { x: 'a - x*exp(x - 3)/(1 + x)', y: 'x - y' },
      { x: { start: 60, nonnegative: true }, y: { start: 0, nonnegative: true } },
      { a: 1 },
      { symbol: 'a', from: 0.5, to: 2 },
    );
    expect(answer.branch.stable.every(Boolean)).toBe(true);
    expect(codes(answer)).toContain('relaxed-start');
    predictAnswer.parse(answer);
  });
});

describe('a caller that waits', () => {
  const request = predictRequest.parse({
    model: {
      name: 'Brusselator',
      timeUnit: 's',
      variables: [
        { symbol: 'x', start: 1 },
        { symbol: 'y', start: 1 },
      ],
      parameters: [
        { symbol: 'A', value: 1, spread: { kind: 'lognormal', cv: 0.1 } },
        { symbol: 'B', value: 1 },
      ],
      equations: { x: 'A - (B + 1)*x + x^2*y', y: 'B*x - x^2*y' },
    },
    control: { symbol: 'B', from: 0.5, to: 4 },
    draws: 200,
  });

  it('sees progress that only rises, to the end', () => {
    const seen: [number, number][] = [];
    predict(request, { progress: (done, total) => seen.push([done, total]) });
    expect(seen.length).toBeGreaterThan(4);
    seen.forEach(([done, total], i) => {
      expect(total).toBe(seen[0]![1]);
      expect(done).toBeGreaterThanOrEqual(i > 0 ? seen[i - 1]![0] : 0);
    });
    expect(seen.at(-1)![0]).toBe(seen[0]![1]);
  });

  it('can cancel, and is told so', () => {
    let asked = 0;
    const e = error(() => predict(request, { cancelled: () => ++asked > 3 }));
    expect([e.code, e.message]).toEqual(['limit-exceeded', 'cancelled']);
  });
});
