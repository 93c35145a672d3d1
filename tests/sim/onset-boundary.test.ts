import { describe, expect, it } from 'vitest';
import { boundaryRequest, EngineError } from '@/lib/contracts';
import { boundary } from '@/lib/sim/boundary/boundary';

const request = (
  equations: Record<string, string>,
  start: Record<string, number>,
  parameters: Record<string, number>,
  control: object,
  second: object,
  points = 200,
) =>
  boundaryRequest.parse({
    model: {
      name: 'case',
      timeUnit: 's',
      variables: Object.entries(start).map(([symbol, s]) => ({ symbol, start: s })),
      parameters: Object.entries(parameters).map(([symbol, value]) => ({ symbol, value })),
      equations,
    },
    control,
    second,
    points,
  });

describe('onset curves in two parameters, against closed forms', () => {
  it('delayed integrator: slope × delay = π/2 all along, period 4 × delay', () => {
    const { curves } = boundary(
      request(
        { x: '-k*x(t - tau)' },
        { x: 0.5 },
        { k: 1, tau: 1 },
        { symbol: 'k', from: 0.2, to: 5 },
        { symbol: 'tau', from: 0.2, to: 5 },
      ),
    );
    expect(curves).toHaveLength(1);
    const { control, second, period } = curves[0]!;
    expect(control).toHaveLength(200);
    control.forEach((k, i) => {
      expect(Math.abs((k * second[i]!) / (Math.PI / 2) - 1)).toBeLessThan(1e-12);
      expect(Math.abs(period[i]! / (4 * second[i]!) - 1)).toBeLessThan(1e-12);
    });
    expect(Math.max(...control)).toBe(5);
    expect(Math.max(...second)).toBe(5);
  });

  it("Sel'kov: both sheets join where 8a = 1", () => {
    const { curves } = boundary(
      request(
        { x: '-x + a*y + x^2*y', y: 'b - a*y - x^2*y' },
        { x: 0.3, y: 1 },
        { a: 0.1, b: 0.5 },
        { symbol: 'b', from: 0.05, to: 1.5 },
        { symbol: 'a', from: 0.01, to: 0.2 },
        101,
      ),
    );
    expect(curves).toHaveLength(1);
    const { control, second } = curves[0]!;
    control.forEach((b, i) => {
      const a = second[i]!;
      expect(Math.abs(b ** 4 + (2 * a - 1) * b * b + a + a * a)).toBeLessThan(1e-12);
    });
    expect(Math.max(...second)).toBeGreaterThan(0.1249);
    expect(Math.max(...second)).toBeLessThanOrEqual(0.125 + 1e-12);
    expect(control.length).toBe(101);
  });

  it('no curve where there is no onset; a second parameter that is none is refused', () => {
    const ask = (symbol: string) =>
      boundary(
        request(
          { x: '-k*x' },
          { x: 1 },
          { k: 1, q: 1 },
          { symbol: 'k', from: 0.5, to: 2 },
          { symbol, from: 0, to: 1 },
        ),
      );
    expect(ask('q').curves).toEqual([]);
    for (const symbol of ['z', 'k']) {
      try {
        ask(symbol);
        expect.unreachable();
      } catch (e) {
        expect(e).toBeInstanceOf(EngineError);
        expect((e as EngineError).at).toBe('second.symbol');
      }
    }
  });
});
