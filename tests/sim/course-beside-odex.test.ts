import { createRequire } from 'node:module';
import { describe, expect, it } from 'vitest';
import { compileModel } from '@/lib/sim/equations/compile';
import { simulate } from '@/lib/sim/integrate/simulate';
import { library } from '@/lib/sim/library';

type Solver = {
  absoluteTolerance: number;
  relativeTolerance: number;
  maxSteps: number;
  solve(
    f: (x: number, y: number[]) => number[],
    from: number,
    y0: number[],
    to: number,
  ): { y: number[]; outcome: number };
};

/** The package ships TypeScript that our strict flags refuse, so it is taken as plain JavaScript. */
const odex = createRequire(import.meta.url)('odex') as {
  Solver: new (n: number) => Solver;
  Outcome: { Converged: number };
};

const CASES = [
  { id: 'chemostat-predator-prey', value: 0.5, until: 30 },
  { id: 'chemostat-predator-prey', value: 1.1, until: 30 },
  { id: 'repressor-loop', value: 20, until: 400 },
  { id: 'glycolysis-feed', value: 0.3, until: 40 },
];

/**
 * An independent reference: the extrapolation code of Hairer, Nørsett & Wanner 1993 as ported in the
 * package odex, whose outcome is always looked at, since it reports failure without throwing.
 */
describe('time courses beside an independent integrator', () => {
  for (const { id, value, until } of CASES) {
    it(`${id} at ${value} ends where odex ends`, () => {
      const entry = library.find((m) => m.id === id)!;
      const system = compileModel(entry.model);
      const p = Float64Array.from(system.values);
      p[system.parameterIndex(entry.control.symbol)] = value;
      const out = new Float64Array(system.n);
      const solver = new odex.Solver(system.n);
      solver.absoluteTolerance = 1e-12;
      solver.relativeTolerance = 1e-11;
      solver.maxSteps = 200_000;
      const rhs = (_: number, y: number[]) => {
        system.rhs(Float64Array.from(y), p, out);
        return Array.from(out);
      };
      const end = solver.solve(rhs, 0, Array.from(system.start), until);
      expect(end.outcome).toBe(odex.Outcome.Converged);
      const readouts = entry.model.variables.map((v) => ({
        symbol: `see_${v.symbol}`,
        expression: v.symbol,
      }));
      const ours = simulate({
        model: { ...entry.model, readouts },
        set: { [entry.control.symbol]: value },
        until,
        every: until,
        noise: false,
        seed: 1,
      });
      entry.model.variables.forEach((v, i) => {
        const last = ours.readouts[`see_${v.symbol}`]!.at(-1)!;
        expect(Math.abs(last - end.y[i]!)).toBeLessThan(1e-6 * Math.max(1e-3, Math.abs(end.y[i]!)));
      });
    });
  }
});
