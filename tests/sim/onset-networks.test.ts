import { describe, expect, it } from 'vitest';
import { type SystemModel, systemModel } from '@/lib/contracts';
import { compileModel } from '@/lib/sim/equations/compile';
import { eigenvalues } from '@/lib/sim/linalg/eigenvalues';
import { type Analysis, analyse } from '@/lib/sim/onset/analyse';
import { randomSource } from '@/lib/sim/random/generator';
import { newton } from '@/lib/sim/steady/newton';
import { Problem } from '@/lib/sim/steady/problem';

/** A random network of 2 to 5 species that switch each other on and off by Hill functions. */
function network(
  seed: number,
  unit: number,
  rate: number,
): { model: SystemModel; control: string } {
  const r = randomSource(seed);
  const n = 2 + r.below(4);
  const equations: Record<string, string> = {};
  const parameters: { symbol: string; value: number }[] = [];
  const add = (value: number) => {
    parameters.push({ symbol: `p${parameters.length}`, value });
    return `p${parameters.length - 1}`;
  };
  for (let i = 0; i < n; i++) {
    const j = r.uniform() < 0.7 ? (i + 1) % n : r.below(n);
    const represses = r.uniform() < 0.5;
    const other = r.below(n);
    const scale = add((0.3 + r.uniform()) * unit);
    const steepness = add(1 + 9 * r.uniform());
    const most = add((0.5 + 4 * r.uniform()) * unit * rate);
    const decay = add((0.2 + r.uniform()) * rate);
    const least = add(0.05 * unit * rate);
    const power = `(x${j}/${scale})^${steepness}`;
    const switched = represses ? `1/(1 + ${power})` : `${power}/(1 + ${power})`;
    const shared = r.uniform() < 0.4 ? ` - ${(0.5 * rate) / unit}*x${i}*x${other}` : '';
    equations[`x${i}`] = `${least} + ${most}*${switched} - ${decay}*x${i}${shared}`;
  }
  const variables = Object.keys(equations).map((symbol) => ({
    symbol,
    start: unit,
    nonnegative: true,
  }));
  const model = systemModel.parse({
    name: `network ${seed}`,
    timeUnit: 's',
    variables,
    parameters,
    equations,
  });
  return { model, control: parameters[r.below(parameters.length)]!.symbol };
}

function analysed(seed: number, unit = 1, rate = 1): { model: SystemModel; found: Analysis } {
  const { model, control } = network(seed, unit, rate);
  const system = compileModel(model);
  const controlIndex = system.parameterIndex(control);
  const value = system.values[controlIndex]!;
  const range = { controlIndex, from: 0.1 * value, to: 4 * value };
  return { model, found: analyse(system, system.values, range, system.start) };
}

/** Brackets of control in which the count of unstable dimensions goes between 0 and 2, on a fine grid. */
function brackets({ scan, context }: Analysis): [number, number][] {
  const { problem } = context;
  const probe = new Problem(problem.system, problem.p, problem.controlIndex);
  const out: [number, number][] = [];
  let last: { count: number; control: number } | null = null;
  for (let q = 1; q < scan.nodes.length; q++) {
    const [a, b] = [scan.nodes[q - 1]!, scan.nodes[q]!];
    for (let s = 0; s < 8; s++) {
      const x = a.x.map((v, i) => v + (s / 8) * (b.x[i]! - v));
      const control = a.control + (s / 8) * (b.control - a.control);
      if (newton(probe, x, control, a.x) !== 'converged') continue;
      probe.linearise(x, control);
      const e = eigenvalues(Float64Array.from(probe.total), probe.n);
      const count = e.re.filter((v) => v > 0).length;
      if (last && Math.abs(count - last.count) === 2 && Math.min(count, last.count) === 0) {
        out.push([last.control, control]);
      }
      last = { count, control };
    }
  }
  return out;
}

describe('random networks', () => {
  it('onsets are those that a fine grid of eigenvalues shows, no more and no fewer', () => {
    let onsets = 0;
    for (let seed = 1; seed <= 120; seed++) {
      const { found } = analysed(seed);
      const { nodes } = found.scan;
      const folded = nodes.some((node, i) => i > 0 && node.control <= nodes[i - 1]!.control);
      if (folded) continue;
      const wanted = brackets(found);
      expect([seed, found.scan.onsets.length]).toEqual([seed, wanted.length]);
      found.scan.onsets.forEach((o, k) => {
        expect(o.control).toBeGreaterThanOrEqual(wanted[k]![0]);
        expect(o.control).toBeLessThanOrEqual(wanted[k]![1]);
      });
      onsets += wanted.length;
    }
    expect(onsets).toBeGreaterThan(8);
  });

  it('the same onsets in other units: states and rates by 10^±9', () => {
    for (let seed = 1; seed <= 60; seed++) {
      const base = analysed(seed).found.scan.onsets;
      if (base.length === 0) continue;
      for (const [unit, rate] of [
        [1e-9, 1e9],
        [1e9, 1e-9],
      ] as const) {
        const { model, found } = analysed(seed, unit, rate);
        const plain = network(seed, 1, 1).model;
        const index = found.context.problem.controlIndex;
        const factor = model.parameters[index]!.value / plain.parameters[index]!.value;
        expect(found.scan.onsets).toHaveLength(base.length);
        found.scan.onsets.forEach((o, k) => {
          expect(Math.abs(o.control / factor / base[k]!.control - 1)).toBeLessThan(1e-9);
          expect(Math.abs(o.omega / rate / base[k]!.omega - 1)).toBeLessThan(1e-9);
        });
      }
    }
  });
});
