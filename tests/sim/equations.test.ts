import { describe, expect, it } from 'vitest';
import { EngineError } from '@/lib/contracts/common';
import type { SystemModel } from '@/lib/contracts/model';
import { checkDelays } from '@/lib/sim/equations/check-delays';
import { checkModel, compileModel } from '@/lib/sim/equations/compile';

function model(
  equations: Record<string, string>,
  parameters: Record<string, number> = {},
  readouts?: SystemModel['readouts'],
): SystemModel {
  return {
    name: 'test',
    timeUnit: 's',
    variables: Object.keys(equations).map((symbol) => ({ symbol, start: 1 })),
    parameters: Object.entries(parameters).map(([symbol, value]) => ({ symbol, value })),
    equations,
    readouts,
  };
}

/** The value of one expression of x = 3, y = 2, a = 5, tau = 1. */
function value(expression: string, extra: Record<string, number> = {}): number {
  const system = compileModel(
    model({ x: expression, y: '0' }, { a: 5, tau: 1, e: 7, E: 11, mod: 13, in: 17, ...extra }),
  );
  const z = new Float64Array(2 * (system.K + 1)).map((_, i) => (i % 2 === 0 ? 3 : 2) + (i >> 1));
  const out = new Float64Array(2);
  system.rhs(z, system.values, out);
  return out[0]!;
}

function refusal(expression: string): EngineError {
  try {
    compileModel(model({ x: expression, y: '0' }, { a: 5, tau: 1 }));
  } catch (error) {
    if (error instanceof EngineError) return error;
    throw error;
  }
  throw new Error(`"${expression}" was accepted`);
}

describe('the grammar of expressions', () => {
  it.each([
    ['-x^2', -9],
    ['2^3^2', 512],
    ['2^-y', 0.25],
    ['2^-y^2', 1 / 16],
    ['-2^-y', -0.25],
    ['a - -x', 8],
    ['--x', 3],
    ['a/x/y', 5 / 6],
    ['a - x - y', 0],
    ['a - (x - y)', 4],
    ['6/2*3', 9],
    ['1e-3', 0.001],
    ['1E3 + .5 + 2.', 1002.5],
    ['e*E', 77],
    ['mod + in', 30],
    ['1e-3*e', 0.007],
    ['min(x, y, a) + max(x, y, a)', 7],
    ['abs(y - x)', 1],
    ['log(exp(x)) + log10(1000) + sqrt(9)', 9],
    ['sin(pi/2) + cos(0) + tan(0)', 2],
    ['cosh(x)^2 - sinh(x)^2 + tanh(0)', 1],
    ['x(t - tau)', 4],
    ['x( t-tau ) + y (t - (tau + 1))', 4 + 4],
    ['x(t - tau - a) + x(t - (a + tau))', 8],
    ['(x)\n*\t(y)', 6],
  ])('%s = %d', (expression, expected) => {
    expect(value(expression)).toBeCloseTo(expected, 12);
  });

  it.each([
    ['2x', 'character 2', 'side by side'],
    ['2 (x)', 'character 3', 'side by side'],
    ['(x)(y)', 'character 4', 'side by side'],
    ['x y', 'character 3', 'side by side'],
    ['1e', 'character 2', 'side by side'],
    ['x(y)', 'character 1', 'variable'],
    ['x(t)', 'character 3', 'x for now'],
    ['x(t + tau)', 'character 3', 't - tau'],
    ['x(t - y)', 'character 7', 'parameters and numbers'],
    ['x(t - x(t - tau))', 'character 7', 'parameters and numbers'],
    ['x(t - -1)', 'character 1', 'negative'],
    ['a(x)', 'character 1', 'parameter'],
    ['t', 'character 1', 'time stands only'],
    ['x + q', 'character 5', 'neither a variable nor a parameter'],
    ['foo(x)', 'character 1', 'no function foo'],
    ['sin x', 'character 1', 'function'],
    ['sin()', 'character 5', 'missing'],
    ['sin(x, y)', 'character 1', 'one argument'],
    ['min(x)', 'character 1', 'two arguments'],
    ['x +', 'at the end', 'missing'],
    ['+x', 'character 1', 'plus'],
    ['x ** 2', 'character 3', '^'],
    ['x * / y', 'character 5', 'missing'],
    ['(x', 'character 1', 'never closed'],
    ['x)', 'character 2', 'no opening bracket'],
    ['x, y', 'character 2', 'comma'],
    ['x = 3', 'character 3', 'right-hand side'],
    ['x[1]', 'character 2', 'round brackets'],
    ['x % 2', 'character 3', '0.05'],
    ["x'", 'character 2', 'right-hand side'],
    ['"x"', 'character 1', 'not part'],
    ['x > 2', 'character 3', 'not part'],
    ['x; y', 'character 2', 'one expression'],
    ['x − y', 'character 3', 'minus as -'],
    ['1e999', 'character 1', 'too large'],
    ['   ', '', 'empty'],
    ['constructor', 'character 1', 'neither a variable nor a parameter'],
    ['x.constructor', 'character 2', 'not part'],
    ['x(t - tau', 'character 2', 'never closed'],
  ])('%s is refused with its place and the remedy', (expression, place, remedy) => {
    const error = refusal(expression);
    expect(error.code).toBe('invalid-equation');
    expect(error.at).toBe('equations.x');
    expect(error.message).toContain(place);
    expect(error.message).toContain(remedy);
  });

  it('bounds length and depth without running out of stack', () => {
    expect(refusal('('.repeat(9000)).message).toContain('deeper than 200');
    expect(refusal(`${'-'.repeat(19000)}x`).message).toContain('deeper than 200');
    expect(refusal(`${'2^'.repeat(9000)}x`).message).toContain('deeper than 200');
    expect(refusal(`x${'+x'.repeat(10_000)}`).message).toContain('20000');
    expect(value(Array.from({ length: 1500 }, (_, i) => `sin(x+${i})`).join('+'))).toBeTypeOf(
      'number',
    );
    expect(value(`y${'+y*x'.repeat(4900)}`)).toBe(2 + 6 * 4900);
    expect(value(`${'('.repeat(150)}x${')'.repeat(150)}`)).toBe(3);
  });

  it('reports every problem of a model, symbols and readouts included', () => {
    const bad = model({ x: 'q', y: '2x' }, { sin: 1, tau: 1 }, [
      { symbol: 'r', expression: 'x +' },
    ]);
    expect(checkModel(bad).map((p) => p.at)).toEqual([
      'parameters.0.symbol',
      'equations.x',
      'equations.y',
      'readouts.0.expression',
    ]);
    expect(checkModel({ ...bad, equations: { x: '1' } }).map((p) => p.message)).toContain(
      'y has no equation; write one',
    );
    expect(checkModel({ ...bad, equations: { x: '1', y: '1', w: '1' } }).at(-2)?.at).toBe(
      'equations.w',
    );
    expect(checkModel(model({ x: 'x', y: '-y' }))).toEqual([]);
  });
});

describe('delays', () => {
  it('counts structurally distinct delays once, and drops a delay of zero', () => {
    const system = compileModel(
      model(
        { x: 'x(t - 2*tau) + y(t - tau*2) + y(t - (s + tau)) + x(t - tau - s) + x(t - 0)', y: 'x' },
        { tau: 1, s: 0.5 },
      ),
    );
    expect(system.K).toBe(2);
    const tau = new Float64Array(2);
    system.delays(system.values, tau);
    expect([...tau]).toEqual([2, 1.5]);
    system.delayDerivative(system.values, 0, tau);
    expect([...tau]).toEqual([2, 1]);
  });

  it('refuses more delays than can be worked', () => {
    const many = Array.from({ length: 101 }, (_, i) => `x(t - ${i + 1})`).join(' + ');
    expect(() => compileModel(model({ x: many }))).toThrow(/at most 100 delays/);
  });

  it('refuses a delay that is negative somewhere in the control range', () => {
    const system = compileModel(model({ x: '-x(t - (tau - s))' }, { tau: 2, s: 1 }));
    expect(() => checkDelays(system, system.values, 0, 1, 3)).not.toThrow();
    expect(() => checkDelays(system, system.values, 0, 0.9, 3)).toThrow(/delays must be 0 or more/);
    expect(() => checkDelays(system, system.values, 1, 0, 3)).toThrow(EngineError);
  });
});
