import { describe, expect, it } from 'vitest';
import { control as controlShape, systemModel } from '@/lib/contracts/model';
import { settledCycle } from '@/lib/sim/cycles/settled-cycle';
import { controlToDose, doseToControl } from '@/lib/sim/dose-map';
import { checkModel, compileModel } from '@/lib/sim/equations/compile';
import { simulate } from '@/lib/sim/integrate/simulate';
import { type LibraryModel, library } from '@/lib/sim/library';
import { predict } from '@/lib/sim/predict';

const get = (id: string): LibraryModel => {
  const found = library.find((entry) => entry.id === id);
  if (!found) throw new Error(`no model ${id}`);
  return found;
};
const value = (entry: LibraryModel, symbol: string) =>
  entry.model.parameters.find((p) => p.symbol === symbol)!.value;
const onsetsOf = (entry: LibraryModel) =>
  predict({ model: entry.model, control: entry.control, draws: 0, seed: 1, cycles: false }).onsets;

describe('every library model', () => {
  it.each(library.map((entry) => [entry.id, entry] as const))('%s is complete', (_, entry) => {
    expect(systemModel.parse(entry.model)).toEqual(entry.model);
    expect(controlShape.parse(entry.control)).toEqual(entry.control);
    expect(checkModel(entry.model)).toEqual([]);
    expect(entry.model.parameters.map((p) => p.symbol)).toContain(entry.control.symbol);
    for (const text of [entry.title, entry.summary, entry.provenance, entry.source.where]) {
      expect(text.length).toBeGreaterThan(10);
    }
    expect(entry.model.readouts!.every((r) => r.noiseSd! > 0)).toBe(true);
    expect(entry.model.parameters.filter((p) => p.spread).length).toBeGreaterThanOrEqual(2);
  });

  it('has its own id', () => {
    expect(new Set(library.map((entry) => entry.id)).size).toBe(library.length);
  });

  it.each(library.map((entry) => [entry.id, entry] as const))(
    '%s has its onsets well inside the doses that its control range spans',
    (_, entry) => {
      const { from, to, doseMap } = entry.control;
      const ends = [from, to].map((c) => controlToDose(doseMap, c)!).sort((a, b) => a - b);
      for (const onset of onsetsOf(entry)) {
        expect(onset.criticality).toBe('supercritical');
        const share = (onset.dose! - ends[0]!) / (ends[1]! - ends[0]!);
        expect(share).toBeGreaterThan(0.09);
        expect(share).toBeLessThan(0.91);
        expect(doseToControl(doseMap, onset.dose!)).toBeCloseTo(onset.value, 10);
      }
    },
  );

  it.each(library.map((entry) => [entry.id, entry] as const))(
    '%s comes to rest on one side of each onset and cycles on the other',
    (_, entry) => {
      const system = compileModel(entry.model);
      const index = system.parameterIndex(entry.control.symbol);
      for (const onset of onsetsOf(entry)) {
        const out = onset.oscillates === 'above' ? 1 : -1;
        const settled = (factor: number) => {
          const p = Float64Array.from(system.values);
          p[index] = onset.value * factor;
          const x = system.start.map(
            (_, i) => onset.steadyState[system.variables[i]!]! * (1 + 0.05 * Math.cos(i)),
          );
          return settledCycle(system, p, x, onset.period);
        };
        expect(settled(1 - 0.12 * out).outcome).toBe('steady');
        const cycle = settled(1 + 0.03 * out);
        expect(cycle.outcome).toBe('cycle');
        if (cycle.outcome === 'cycle')
          expect(Math.abs(cycle.period / onset.period - 1)).toBeLessThan(0.15);
      }
    },
  );
});

describe('onsets against independent formulas', () => {
  it('glycolysis: b² = (1 − 2a ∓ √(1 − 8a))/2, ω = √(a + b²) (Strogatz 1994, section 7.3)', () => {
    const entry = get('glycolysis-feed');
    const [k, a, S] = ['k', 'a', 'S'].map((s) => value(entry, s)) as [number, number, number];
    const onsets = onsetsOf(entry);
    expect(onsets.map((o) => o.oscillates)).toEqual(['above', 'below']);
    [-1, 1].forEach((sign, i) => {
      const b = Math.sqrt((1 - 2 * a + sign * Math.sqrt(1 - 8 * a)) / 2);
      expect(Math.abs(onsets[i]!.value / (b * k * S) - 1)).toBeLessThan(1e-10);
      const period = (2 * Math.PI) / (k * Math.sqrt(a + b * b));
      expect(Math.abs(onsets[i]!.period / period - 1)).toBeLessThan(1e-10);
    });
  });

  it('repressor ring: (β + 1)²/β = 3X²/(4 + 2X), X = −αn pⁿ⁻¹/(1 + pⁿ)² (Elowitz & Leibler 2000, Box 1)', () => {
    const entry = get('repressor-loop');
    const beta = value(entry, 'beta');
    const left = (beta + 1) ** 2 / beta;
    // With n = 2 and p(1 + p²) = α the slope is X = −2p²/(1 + p²): a quadratic for X, then for p.
    const X = (left - Math.sqrt(left * left + 12 * left)) / 3;
    const p = Math.sqrt(-X / (2 + X));
    const onsets = onsetsOf(entry);
    expect(onsets).toHaveLength(1);
    expect(onsets[0]!.oscillates).toBe('above');
    expect(Math.abs(onsets[0]!.value / (p * (1 + p * p)) - 1)).toBeLessThan(1e-10);
    expect(Math.abs(onsets[0]!.steadyState.p2! / p - 1)).toBeLessThan(1e-9);
  });

  it('repressor ring: more dose is less promoter strength', () => {
    const { doseMap } = get('repressor-loop').control;
    expect(doseToControl(doseMap, 0)).toBe(216);
    expect(doseToControl(doseMap, 60)!).toBeLessThan(doseToControl(doseMap, 50)!);
  });

  it('pupil: τ = arccos(−α/B)/√(B² − α²) with B the slope of the feedback (Hayes 1950)', () => {
    const entry = get('pupil-delayed-feedback');
    const [c, th, n, alpha] = ['c', 'th', 'n', 'alpha'].map((s) => value(entry, s)) as [
      number,
      number,
      number,
      number,
    ];
    const feedback = (x: number) => (c * th ** n) / (th ** n + x ** n);
    let [low, high] = [0, c / alpha];
    for (let i = 0; i < 100; i += 1) {
      const middle = (low + high) / 2;
      if (feedback(middle) > alpha * middle) low = middle;
      else high = middle;
    }
    const slope = (n * alpha * low ** n) / (th ** n + low ** n);
    const omega = Math.sqrt(slope ** 2 - alpha ** 2);
    const [onset, ...others] = onsetsOf(entry);
    expect(others).toEqual([]);
    expect(Math.abs(onset!.value / (Math.acos(-alpha / slope) / omega) - 1)).toBeLessThan(1e-10);
    expect(Math.abs(onset!.period / ((2 * Math.PI) / omega) - 1)).toBeLessThan(1e-10);
  });

  it('chemostat: both edges as computed elsewhere from the parameters of Fussmann et al. 2000', () => {
    // Steady state and eigenvalues of the published equations by a general scientific library: 0.15098 and 0.96954 per
    // day, periods 5.905 and 5.445 days. The paper prints no onset values.
    const onsets = onsetsOf(get('chemostat-predator-prey'));
    expect(onsets.map((o) => o.oscillates)).toEqual(['above', 'below']);
    expect(onsets[0]!.value).toBeCloseTo(0.15098, 5);
    expect(onsets[1]!.value).toBeCloseTo(0.96954, 5);
    expect(onsets[0]!.period).toBeCloseTo(5.905, 3);
    expect(onsets[1]!.period).toBeCloseTo(5.445, 3);
    // 0.64 per day from 380 mL is 10.13 mL/h (arithmetic).
    expect(controlToDose(get('chemostat-predator-prey').control.doseMap, 0.64)).toBeCloseTo(
      10.133,
      3,
    );
  });

  it('chemostat: algae and rotifers cycle at the flows where the experiment saw cycles (0.64 per day)', () => {
    const { model } = get('chemostat-predator-prey');
    const swing = (de: number) => {
      const { readouts } = simulate({
        model,
        set: { de },
        until: 400,
        every: 1,
        noise: false,
        seed: 1,
      });
      const late = readouts.rotifers!.slice(300);
      return Math.max(...late) - Math.min(...late);
    };
    expect(swing(0.64)).toBeGreaterThan(1);
    expect(swing(0.1)).toBeLessThan(0.05);
    expect(swing(1.2)).toBeLessThan(0.05);
  });
});
