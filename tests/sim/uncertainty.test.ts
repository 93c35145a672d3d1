import { describe, expect, it } from 'vitest';
import { predictAnswer, predictRequest, type Spread } from '@/lib/contracts';
import { compileModel } from '@/lib/sim/equations/compile';
import { analyse } from '@/lib/sim/onset/analyse';
import { predict } from '@/lib/sim/predict';
import { normalQuantile } from '@/lib/sim/random/normal-quantile';
import { matchOnsets } from '@/lib/sim/uncertainty/match-onsets';
import { quantile } from '@/lib/sim/uncertainty/quantile';
import { sampler } from '@/lib/sim/uncertainty/sample';
import cases from '../reference/check-values.json';

const brusselator = (spread: Spread, control: object, more: object = {}) =>
  predictRequest.parse({
    model: {
      name: 'Brusselator',
      timeUnit: 's',
      variables: [
        { symbol: 'x', start: 1, nonnegative: true },
        { symbol: 'y', start: 1, nonnegative: true },
      ],
      parameters: [
        { symbol: 'A', value: 1, spread },
        { symbol: 'B', value: 1, spread: { kind: 'normal', sd: 5 } },
      ],
      equations: { x: 'A - (B + 1)*x + x^2*y', y: 'B*x - x^2*y' },
    },
    control: { symbol: 'B', from: 0.5, to: 4, ...control },
    cycles: false,
    ...more,
  });

describe('onset bands against closed forms (onset of the Brusselator: 1 + A²)', () => {
  it('lognormal spread: median and 90 % band, exactly the share without onset', () => {
    const request = brusselator({ kind: 'lognormal', cv: 0.3 }, {}, { draws: 2000, seed: 3 });
    const answer = predict(request);
    const { spread } = answer.onsets[0]!;
    const s = Math.sqrt(Math.log1p(0.09));
    // Beyond B = 4 the draw has no onset in range: A > √3.
    const system = compileModel(request.model);
    const drawn = sampler(request.model, request.control, system)
      .draws(2000, 3)
      .map((d) => 1 + d.parameters[0]! ** 2);
    const inside = drawn.filter((v) => v <= 4);
    expect(spread!.none).toBe((2000 - inside.length) / 2000);
    expect(spread!.none).toBeGreaterThan(0.02);
    spread!.values.forEach((v, i) => {
      expect(Math.abs(v / inside[i]! - 1)).toBeLessThan(1e-11);
    });
    const cut = 1 - spread!.none;
    const exact = (p: number) => 1 + Math.exp(s * normalQuantile(p * cut)) ** 2;
    expect(spread!.low).toBeCloseTo(exact(0.05), 2);
    expect(spread!.median).toBeCloseTo(exact(0.5), 2);
    expect(spread!.high).toBeCloseTo(exact(0.95), 1);
    expect(answer.notes.map((n) => n.code)).toContain('draws-without-onset');
    predictAnswer.parse(answer);
  });

  it('unphysical draws count as none: a negative feed has no steady state', () => {
    const request = brusselator({ kind: 'uniform', low: -1, high: 1 }, { from: 0.9 });
    const { spread } = predict(request).onsets[0]!;
    expect(spread!.none).toBeCloseTo(0.5, 2);
    expect(spread!.values).toHaveLength(Math.round(400 * (1 - spread!.none)));
  });

  it('the same seed gives the same digits, another seed others; no draws, no spread', () => {
    const one = predict(brusselator({ kind: 'normal', sd: 0.1 }, {}, { draws: 50 }));
    const two = predict(brusselator({ kind: 'normal', sd: 0.1 }, {}, { draws: 50 }));
    const other = predict(brusselator({ kind: 'normal', sd: 0.1 }, {}, { draws: 50, seed: 2 }));
    expect(two).toEqual(one);
    expect(other.onsets[0]!.spread!.values).not.toEqual(one.onsets[0]!.spread!.values);
    const none = predict(brusselator({ kind: 'normal', sd: 0.1 }, {}, { draws: 0 }));
    expect(none.onsets[0]!.spread).toBeNull();
  });

  it('doses go through the dose map, its own spread included; null where unreachable', () => {
    // B = base/(1 + dose/ec50): the onset 2 lies at dose = ec50 (base/2 − 1).
    const doseMap = {
      kind: 'hill-inhibition',
      base: 6,
      ec50: { value: 10, spread: { kind: 'lognormal', cv: 0.2 } },
      hill: 1,
    };
    const sure = predict(brusselator({ kind: 'normal', sd: 0 }, { doseMap }, { draws: 400 }));
    const o = sure.onsets[0]!;
    expect(o.dose).toBeCloseTo(20, 10);
    const doses = o.spread!.doses.map(Number).sort((a, b) => a - b);
    expect(quantile(doses, 0.5)).toBeCloseTo(20, 1);
    const s = Math.sqrt(Math.log1p(0.04));
    expect(quantile(doses, 0.95)).toBeCloseTo(20 * Math.exp(1.6449 * s), 0);
    const low = predict(
      brusselator({ kind: 'normal', sd: 0.1 }, { doseMap: { ...doseMap, base: 2 } }, { draws: 60 }),
    ).onsets[0]!;
    expect(low.spread!.doses.filter((d) => d === null).length).toBeGreaterThan(10);
    expect(low.spread!.doses.filter((d) => d !== null).length).toBeGreaterThan(10);
  });

  it('two onsets keep their own draws', () => {
    const request = predictRequest.parse({
      ...cases[27]!.request,
      draws: 300,
      cycles: false,
    });
    request.model.parameters[0]!.spread = { kind: 'normal', sd: 0.008 };
    const [low, high] = predict(request).onsets;
    const a = sampler(request.model, request.control, compileModel(request.model))
      .draws(300, 1)
      .map((d) => d.parameters[0]!);
    const exact = (sign: number) =>
      a.map((v) => Math.sqrt((1 - 2 * v + sign * Math.sqrt(1 - 8 * v)) / 2));
    low!.spread!.values.forEach((v, i) => {
      expect(Math.abs(v / exact(-1)[i]! - 1)).toBeLessThan(1e-10);
    });
    high!.spread!.values.forEach((v, i) => {
      expect(Math.abs(v / exact(1)[i]! - 1)).toBeLessThan(1e-10);
    });
    expect(low!.spread!.none + high!.spread!.none).toBe(0);
  });
});

describe('every draw, whichever way it is solved', () => {
  // Number of the reference system, and the spread put on all of its positive parameters.
  const picks = [
    [4, 0.1],
    [7, 0.2],
    [19, 0.1],
    [21, 0.2],
    [22, 0.1],
    [28, 0.15],
    [34, 0.1],
    [37, 0.1],
    [38, 0.1],
  ] as const;
  for (const [number, cv] of picks) {
    const reference = cases[number - 1]!;
    it(`agrees with a full scan of its own: ${reference.title}`, () => {
      const request = predictRequest.parse({ ...reference.request, draws: 60, cycles: false });
      for (const p of request.model.parameters) {
        if (p.value > 0) p.spread = { kind: 'lognormal', cv };
      }
      const answer = predict(request);
      const system = compileModel(request.model);
      const { symbol, from, to } = request.control;
      const range = { controlIndex: system.parameterIndex(symbol), from, to };
      const nominal = analyse(system, system.values, range, system.start);
      const wanted: number[][] = nominal.scan.onsets.map(() => []);
      for (const draw of sampler(request.model, request.control, system).draws(60, 1)) {
        const own = analyse(system, draw.parameters, range, nominal.equilibrium.x);
        matchOnsets(nominal.scan.onsets, own.scan.onsets).forEach((v, k) => {
          if (v !== null) wanted[k]!.push(v);
        });
      }
      answer.onsets.forEach((o, k) => {
        expect(o.spread!.values).toHaveLength(wanted[k]!.length);
        o.spread!.values.forEach((v, i) => {
          expect(Math.abs(v - wanted[k]![i]!)).toBeLessThan(1e-8 * (to - from));
        });
      });
    });
  }
});
