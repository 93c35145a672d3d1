import { describe, expect, it } from 'vitest';
import { type EstimateRequest, estimateAnswer, type Verdict } from '@/lib/contracts';
import { estimate } from '@/lib/evidence/estimate/estimate';
import { zeroCrossing } from '@/lib/evidence/estimate/line';
import { fitThreshold } from '@/lib/evidence/estimate/threshold';
import { evenTimes, limitCycle, nudge, random } from './simulated-records';

type Levels = EstimateRequest['levels'];
const verdicts = (...pairs: [number, Verdict][]): Levels =>
  pairs.map(([control, verdict]) => ({ control, verdict }));

/**
 * Agrees with what Fussmann et al. 2000, Science 290:1358, say: dilution rates from 0.04 to 1.37 per day,
 * steady up to 0.32, cycles from 0.64 and lost near 1.16, where one trial cycled and one did not. The
 * rates 0.16, 0.8, 1.0 and 1.24 are filled in to agree with that; they are not read from the paper.
 */
const CHEMOSTAT = verdicts(
  [0.04, 'steady'],
  [0.16, 'steady'],
  [0.32, 'steady'],
  [0.64, 'sustained'],
  [0.8, 'sustained'],
  [1.0, 'sustained'],
  [1.16, 'sustained'],
  [1.16, 'steady'],
  [1.24, 'steady'],
  [1.37, 'steady'],
);

describe('published observations of the chemostat (Fussmann et al. 2000)', () => {
  it('give two onsets, bracketed in 0.32–0.64 and near 1.16 per day', () => {
    const answer = estimate({ levels: CHEMOSTAT });
    expect(estimateAnswer.parse(answer)).toEqual(answer);
    expect(answer.onsets.map((o) => o.oscillates)).toEqual(['above', 'below']);
    const [lower, upper] = answer.onsets;
    expect(lower!.onset.value).toBeCloseTo(0.48, 10);
    expect(lower!.onset.low).toBeCloseTo(0.32 + 0.05 * 0.32, 10);
    expect(lower!.onset.high).toBeCloseTo(0.64 - 0.05 * 0.32, 10);
    expect(upper!.onset.value).toBeGreaterThan(1.08);
    expect(upper!.onset.value).toBeLessThan(1.24);
    expect(upper!.onset.low).toBeLessThan(1.16);
    expect(upper!.onset.high).toBeGreaterThan(1.16);
  });

  it('give both onsets from the few rates that the text names: one sustained level serves both', () => {
    const levels = CHEMOSTAT.filter((l) => [0.04, 0.32, 0.64, 1.16, 1.37].includes(l.control));
    const upper = estimate({ levels, oscillates: 'below' }).onsets[0]!;
    expect(upper.onset.value).toBeGreaterThan(0.64);
    expect(upper.onset.value).toBeLessThan(1.37);
    expect(upper.onset.low).toBeLessThan(1.16);
    expect(upper.onset.high).toBeGreaterThan(1.16);
    expect(estimate({ levels }).onsets.map((o) => o.oscillates)).toEqual(['above', 'below']);
  });

  it('differ from the predicted lower onset 0.151, and the update follows the evidence', () => {
    const values = Array.from({ length: 200 }, (_, i) => 0.151 + 0.0002 * (i - 100));
    const answer = estimate({ levels: CHEMOSTAT, predicted: { values }, oscillates: 'above' });
    expect(answer.onsets).toHaveLength(1);
    const onset = answer.onsets[0]!;
    expect(onset.agreement!.verdict).toBe('differs');
    expect(onset.agreement!.difference).toBeCloseTo(0.329, 2);
    expect(answer.notes.map((n) => n.code)).toContain('prediction-overruled');
    const updated = [...onset.updated!.values].sort((a, b) => a - b);
    expect(updated[Math.floor(updated.length * 0.1)]).toBeGreaterThan(0.32);
    expect(updated[Math.floor(updated.length * 0.9)]).toBeLessThan(0.64);
  });

  it('are the same whatever is predicted: the onset rests on the evidence alone', () => {
    const without = estimate({ levels: CHEMOSTAT, oscillates: 'below' }).onsets[0]!;
    const predicted = { mean: 0.97, sd: 0.05 };
    const beside = estimate({ levels: CHEMOSTAT, predicted, oscillates: 'below' }).onsets[0]!;
    expect(beside.onset).toEqual(without.onset);
    expect(beside.methods).toEqual(without.methods);
  });
});

describe('threshold', () => {
  it('matches R glm and its 95 % profile interval: 16.006 (14.802–17.239)', () => {
    const cells = [0, 0, 1, 3, 5, 6].map((k, i) => ({ x: 10 + 2 * i, sustained: k, total: 6 }));
    const fit = fitThreshold(cells, { slopeSd: Infinity, lapse: 0, drop: 3.841459 / 2 })!;
    expect(fit.value).toBeCloseTo(16.006, 3);
    expect(fit.low).toBeCloseTo(14.802, 2);
    expect(fit.high).toBeCloseTo(17.239, 2);
  });

  it('stays finite where verdicts separate perfectly, and the bracket is used instead', () => {
    const levels = verdicts(
      ...[1, 2, 3].map((x): [number, Verdict] => [x, 'steady']),
      ...[4, 5, 6].map((x): [number, Verdict] => [x, 'sustained']),
    );
    const onset = estimate({ levels }).onsets[0]!;
    expect(onset.onset.value).toBeCloseTo(3.5, 10);
    expect(onset.onset.low).toBeCloseTo(3.05, 10);
    expect(onset.onset.high).toBeCloseTo(3.95, 10);
    const threshold = onset.methods.find((m) => m.name === 'threshold')!;
    expect(threshold.used).toBe(false);
    expect(threshold.onset!.high).toBeLessThan(6);
  });
});

describe('amplitude law', () => {
  /** Half-ranges of x of the Brusselator with A = 1, whose exact onset is B = 2. */
  const near = [0.1648, 0.2027, 0.2351, 0.264, 0.2905];

  it('puts the Brusselator at 2.0012 from an unweighted line (recomputed in R)', () => {
    const points = near.map((a, i) => ({ x: 2.02 + 0.01 * i, y: a * a, sd: 0 }));
    const crossing = zeroCrossing(points);
    expect(crossing.kind === 'crossing' && crossing.interval.value).toBeCloseTo(2.0012, 4);
  });

  it('narrows the bracket, and its interval holds the exact onset', () => {
    const amplitudes = near.map((value, i) => ({
      control: 2.02 + 0.01 * i,
      verdict: 'sustained' as const,
      amplitude: { value, low: 0.98 * value, high: 1.02 * value },
    }));
    const onset = estimate({ levels: [...verdicts([1.9, 'steady']), ...amplitudes] }).onsets[0]!;
    expect(onset.methods.find((m) => m.name === 'amplitude law')!.used).toBe(true);
    expect(onset.onset.low).toBeLessThan(2);
    expect(onset.onset.high).toBeGreaterThan(2);
    expect(onset.onset.high - onset.onset.low).toBeLessThan(0.03);
  });

  it('is not used on a jump', () => {
    const jump = [0.5, 0.6, 0.7, 0.8].map((control) => {
      const value = Math.sqrt(1 + 0.3 * (control - 0.5));
      const amplitude = { value, low: 0.99 * value, high: 1.01 * value };
      return { control, verdict: 'sustained' as const, amplitude };
    });
    const onset = estimate({ levels: [...verdicts([0.3, 'steady'], [0.4, 'steady']), ...jump] });
    const law = onset.onsets[0]!.methods.find((m) => m.name === 'amplitude law')!;
    expect(law.used).toBe(false);
    expect(onset.onsets[0]!.onset.value).toBeCloseTo(0.45, 10);
  });
});

describe('decay rate', () => {
  const damped = (control: number, rate: number): Levels[number] => ({
    control,
    verdict: 'damped',
    growthRate: { value: rate, low: rate - 0.05, high: rate + 0.05 },
  });

  it('gives an onset from the steady side alone, with its interval', () => {
    const levels = [0.1, 0.2, 0.3, 0.4].map((c) => damped(c, 2 * (c - 0.55)));
    const answer = estimate({ levels, oscillates: 'above' });
    expect(answer.onsets[0]!.onset.value).toBeCloseTo(0.55, 8);
    expect(answer.onsets[0]!.onset.low).toBeGreaterThan(0.45);
    expect(answer.onsets[0]!.onset.high).toBeLessThan(0.7);
    expect(answer.notes.map((n) => n.code)).toContain('bound-only');
  });

  it('works downwards for an onset that oscillates below', () => {
    const levels = [0.6, 0.7, 0.8].map((c) => damped(c, -2 * (c - 0.5)));
    const answer = estimate({ levels, oscillates: 'below' });
    expect(answer.onsets[0]!.onset.value).toBeCloseTo(0.5, 8);
  });

  it('leaves the levels beyond the turning point of the rate out (glycolysis model, science)', () => {
    const rates: [number, number][] = [
      [16.5, 0.01],
      [17, -0.02],
      [17.5, -0.058],
      [17.8, -0.0405],
      [18.1, -0.0232],
      [18.3, -0.0116],
    ];
    const levels = rates.map(([control, r]) => ({
      control,
      verdict: 'damped' as const,
      growthRate: { value: r, low: r - 0.002, high: r + 0.002 },
    }));
    const onset = estimate({ levels, oscillates: 'above' }).onsets[0]!;
    expect(onset.onset.low).toBeLessThan(18.5);
    expect(onset.onset.high).toBeGreaterThan(18.5);
  });
});

describe('what cannot be estimated is bounded in words', () => {
  it('no sustained level', () => {
    const answer = estimate({ levels: CHEMOSTAT.slice(0, 3), oscillates: 'above' });
    expect(answer.onsets).toEqual([]);
    expect(answer.notes.map((n) => n.text).join(' ')).toContain('the onset lies above 0.32');
  });
  it('no steady level, none decided, none at all', () => {
    const all = estimate({
      levels: verdicts([1, 'sustained'], [2, 'sustained']),
      oscillates: 'above',
    });
    expect(all.notes[0]!.text).toContain('the onset lies below 1');
    expect(estimate({ levels: verdicts([1, 'undecided']) }).notes[0]!.code).toBe('cannot-estimate');
    expect(estimate({ levels: [] })).toMatchObject({
      onsets: [],
      notes: [{ code: 'cannot-estimate' }],
    });
    expect(estimate({ levels: [{ control: 1 }] }).notes[0]!.code).toBe('evidence-missing');
  });
});

describe('replicates, directions, records', () => {
  it('one level against the pattern does not make a second onset', () => {
    const levels = verdicts(
      [1, 'steady'],
      [2, 'sustained'],
      [2, 'steady'],
      [2, 'steady'],
      [3, 'steady'],
      [4, 'sustained'],
      [5, 'sustained'],
    );
    const answer = estimate({ levels });
    expect(answer.onsets).toHaveLength(1);
    expect(answer.notes.map((n) => n.code)).toContain('inconsistent-verdicts');
    expect(answer.onsets[0]!.onset.low).toBeGreaterThan(1);
    expect(answer.onsets[0]!.onset.high).toBeLessThan(5.5);
  });

  it('reports each preparation, and the spread between them widens the population interval', () => {
    const of = (preparation: string, at: number): Levels =>
      [0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8].map((control) => ({
        control,
        preparation,
        verdict: control > at ? 'sustained' : 'steady',
      }));
    const levels = [...of('A', 0.25), ...of('B', 0.45), ...of('C', 0.65)];
    const onset = estimate({ levels }).onsets[0]!;
    expect(onset.byPreparation.map((p) => p.onset.value)).toEqual([
      expect.closeTo(0.25, 8),
      expect.closeTo(0.45, 8),
      expect.closeTo(0.65, 8),
    ]);
    expect(onset.onset.value).toBeCloseTo(0.45, 1);
    expect(onset.onset.high - onset.onset.low).toBeGreaterThan(0.3);
  });

  it('reports both thresholds where rising and falling runs differ, and takes the rising one', () => {
    const run = (direction: 'up' | 'down', at: number): Levels =>
      [1, 2, 3, 4, 5, 6, 7, 8].map((control) => ({
        control,
        direction,
        verdict: control > at ? 'sustained' : 'steady',
      }));
    const answer = estimate({ levels: [...run('up', 6.5), ...run('down', 3.5)] });
    const onset = answer.onsets[0]!;
    expect(onset.hysteresis!.up.value).toBeCloseTo(6.5, 8);
    expect(onset.hysteresis!.down.value).toBeCloseTo(3.5, 8);
    expect(onset.onset.value).toBeCloseTo(6.5, 8);
    expect(answer.notes.map((n) => n.code)).toContain('hysteresis');
  });

  it('judges records first', () => {
    const levels: Levels = [
      { control: 1, record: nudge(random(1), 6, 12, -0.4, 0.05) },
      { control: 2, record: nudge(random(2), 6, 12, -0.2, 0.05) },
      { control: 3, record: limitCycle(random(3), evenTimes(121), 12, 0.1) },
    ];
    const onset = estimate({ levels }).onsets[0]!;
    expect(onset.onset.low).toBeGreaterThan(2);
    expect(onset.onset.high).toBeLessThan(3.1);
  });

  it('mirrors exactly when the control changes sign, and scales with its unit', () => {
    const plain = estimate({ levels: CHEMOSTAT }).onsets;
    const mirrored = estimate({ levels: CHEMOSTAT.map((l) => ({ ...l, control: -l.control })) });
    expect(mirrored.onsets[0]!.onset.value).toBeCloseTo(-plain[1]!.onset.value, 6);
    const scaled = estimate({ levels: CHEMOSTAT.map((l) => ({ ...l, control: 1e9 * l.control })) });
    scaled.onsets.forEach((o, i) => {
      expect(o.onset.value / 1e9).toBeCloseTo(plain[i]!.onset.value, 6);
    });
  });
});

describe('against the prediction', () => {
  it('gives the normalised error of 18.50 ± 0.30 against 19.10 ± 0.40 (U at k = 2): 1.20', () => {
    // Decay rates whose line crosses zero at 18.5 with a 90 % half-width near 0.30 · 1.645/2.
    const predicted = { mean: 19.1, sd: 0.2 };
    const levels = verdicts([18.5 - 0.274, 'steady'], [18.5 + 0.274, 'sustained']);
    const onset = estimate({ levels, predicted, oscillates: 'above' }).onsets[0]!;
    expect(onset.agreement!.normalisedError).toBeCloseTo(-1.2, 2);
    expect(onset.agreement!.verdict).toBe('differs');
  });

  it('an agreeing prediction is sharpened by the evidence and stays near it', () => {
    const predicted = { mean: 0.5, sd: 0.15 };
    const onset = estimate({ levels: CHEMOSTAT, predicted, oscillates: 'above' }).onsets[0]!;
    expect(onset.agreement!.verdict).toBe('agrees');
    const values = onset.updated!.values;
    const mean = values.reduce((s, v) => s + v / values.length, 0);
    const sd = Math.sqrt(values.reduce((s, v) => s + (v - mean) ** 2 / values.length, 0));
    expect(sd).toBeLessThan(0.15);
    expect(mean).toBeGreaterThan(0.32);
    expect(mean).toBeLessThan(0.64);
  });
});
