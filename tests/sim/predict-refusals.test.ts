import { describe, expect, it } from 'vitest';
import { EngineError, predictAnswer } from '@/lib/contracts';
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
