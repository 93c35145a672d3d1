import { describe, expect, test } from 'vitest';
import type { Branch, PredictAnswer, PredictedOnset } from '@/lib/contracts';
import {
  amplitudesOf,
  ceilingOnControl,
  combOf,
  fallingMap,
} from '@/lib/server/predictions/ribbon';
import { growthRateAt, settlingNear } from '@/lib/server/predictions/settling';
import { doseBand, headText, predictionSentence, waitText } from '@/lib/server/predictions/words';

const onset: PredictedOnset = {
  value: 0.151,
  period: 5.905,
  criticality: 'supercritical',
  lyapunov: -1,
  oscillates: 'above',
  growthSlope: 1,
  coexistence: null,
  steadyState: {},
  dose: 0.151,
  spread: {
    draws: 100,
    median: 0.151,
    low: 0.112,
    high: 0.208,
    none: 0,
    values: [0.112, 0.208],
    doses: [0.2, null, 0.1],
  },
};
const control = { symbol: 'D', from: 0, to: 1.3 };
const branchOf = (at: number[], growthRate: number[]): Branch => ({
  control: at,
  growthRate,
  frequency: at.map(() => 1),
  stable: growthRate.map((g) => g < 0),
  steadyState: {},
});
const answerOf = (onsets: PredictedOnset[]): PredictAnswer => ({
  onsets,
  branch: branchOf([], []),
  cycles: [],
  notes: [],
});
const plain = (text: string) => text.replaceAll(/\s/g, ' ');
const say = (onsets: PredictedOnset[]) =>
  plain(predictionSentence({ answer: answerOf(onsets), control, unit: '1/d', timeUnit: 'd' }));

describe('the finding of a prediction', () => {
  test('says where it begins, how sure that is, and how fast it goes', () => {
    expect(say([onset])).toBe(
      'Begins to oscillate at 0.151 /d (0.112–0.208), with a period of 5.9 d.',
    );
  });

  test('never says begins where the oscillation ends', () => {
    expect(say([{ ...onset, oscillates: 'below' }])).toMatch(/^Oscillates below 0.151 /);
  });

  test('names both ends of a window, and says when there is none', () => {
    const end = {
      ...onset,
      value: 0.97,
      period: 5.445,
      oscillates: 'below' as const,
      spread: null,
    };
    expect(say([onset, end])).toBe(
      'Oscillates from 0.151 /d (0.112–0.208) to 0.97 /d, with periods of 5.9 d and 5.4 d at the ends.',
    );
    expect(say([])).toBe('No onset between 0 and 1.3 /d.');
  });

  test('names the control parameter where no unit tells what the figure is', () => {
    const words = { answer: answerOf([onset]), control, timeUnit: 'd', label: 'promoter strength' };
    expect(plain(predictionSentence({ ...words, unit: '' }))).toMatch(
      /^Begins to oscillate at promoter strength 0.151 /,
    );
    expect(plain(predictionSentence({ ...words, unit: '1/d' }))).toMatch(/at 0.151 \/d /);
  });

  test('begins the head of a column with a capital, unless the name has its own', () => {
    expect(['pump rate', 'pH', 'CO2 flow', 'k', 'dose'].map(headText)).toEqual([
      'Pump rate',
      'pH',
      'CO2 flow',
      'k',
      'Dose',
    ]);
  });

  test('takes the band of doses from the reachable draws alone', () => {
    const band = doseBand(onset);
    expect(band?.low).toBeCloseTo(0.105, 12);
    expect(band?.high).toBeCloseTo(0.195, 12);
    expect(doseBand({ ...onset, spread: null })).toBeNull();
  });
});

describe('how long to wait', () => {
  // Yeast glycolysis in a flow reactor, recomputed with R from Hynne et al. 2001 (BIOMD0000000061):
  // 0.5 mM below the onset the time constant is 29.4 min, so three of them are 88 min; at 19.0 mM
  // the rate is 0.02345/min, so growing from 1 % to 50 % takes 166.8 min.
  test('is three to 4.6 time constants where it is steady, ln 50 of them where it oscillates', () => {
    const glycolysis = { ...onset, value: 18.5, spread: { ...onset.spread!, low: 18, high: 19 } };
    const range = { symbol: 'G', from: 16, to: 22 };
    const branch = branchOf([18, 18.5, 19], [-1 / 29.4, 0, 0.02345]);
    const rows = settlingNear(glycolysis, range, branch);
    const at = (c: number) => rows.find((r) => r.control === c);
    expect(at(18)).toMatchObject({ side: 'steady' });
    expect(at(18)?.from).toBeCloseTo(88.2, 1);
    expect(at(18)?.to).toBeCloseTo(4.6 * 29.4, 6);
    expect(at(19)).toMatchObject({ side: 'oscillating' });
    expect(at(19)?.from).toBeCloseTo(166.8, 1);
  });

  test('takes the rate from the branch, and from the slope where the branch is not there', () => {
    const branch = branchOf([0, 1, 2], [-4, -2, 0]);
    expect(growthRateAt(branch, 0.5)).toBe(-3);
    expect(growthRateAt(branch, 5)).toBeNull();
    expect(growthRateAt(branchOf([0, 1, 0], [-1, -2, -3]), 0.5)).toBeNull();
    const rows = settlingNear({ ...onset, growthSlope: 2 }, control, branchOf([], []));
    for (const row of rows) expect(row.growthRate).toBeCloseTo(2 * (row.control - 0.151), 12);
  });

  test('is said in a unit that a person would use', () => {
    const said = (from: number, to: number, unit: string) => plain(waitText(from, to, unit));
    expect(said(2044, 3134, 'min')).toBe('1.4–2.2 d');
    expect(said(88.2, 135.2, 'min')).toBe('1.5–2.3 h');
    expect(said(30, 46, 'd')).toBe('30–46 d');
    expect(said(50, 77, 'ms')).toBe('50–77 ms');
    expect(said(46, 46, 'd')).toBe('46 d');
    expect(said(3, 4, 'wk')).toBe('3–4 wk');
  });

  test('stays within the control range', () => {
    const rows = settlingNear(onset, { ...control, from: 0.14, to: 0.16 }, branchOf([], []));
    expect(rows).toEqual([]);
  });
});

describe('what the ribbon shows', () => {
  const hill = { kind: 'hill-inhibition' as const, base: 10, ec50: 20, hill: 2 };

  test('puts the ceiling dose on the control axis, on its forbidden side', () => {
    expect(ceilingOnControl(control, 1)).toEqual({ ceiling: 1, ceilingSide: 'above' });
    expect(ceilingOnControl(control, 2)).toBeNull();
    // At its EC50 an inhibiting Hill map gives half of its base.
    const inhibiting = { symbol: 'k', from: 0, to: 10, doseMap: hill };
    expect(ceilingOnControl(inhibiting, 20)).toEqual({ ceiling: 5, ceilingSide: 'below' });
  });

  test('knows which maps fall', () => {
    const falls = (doseMap: Parameters<typeof fallingMap>[0]['doseMap']) =>
      fallingMap({ ...control, doseMap });
    expect(falls(undefined)).toBe(false);
    expect(falls(hill)).toBe(true);
    expect(
      falls({ kind: 'linear', slope: { value: -1, spread: { kind: 'normal', sd: 1 } }, offset: 3 }),
    ).toBe(true);
    expect(falls({ kind: 'table', dose: [0, 1], value: [2, 1] })).toBe(true);
    expect(falls({ kind: 'table', dose: [1, 0], value: [2, 1] })).toBe(false);
  });

  test('draws nineteen quantiles of the draws', () => {
    const comb = combOf(Array.from({ length: 101 }, (_, i) => 100 - i));
    expect(comb).toHaveLength(19);
    expect(comb[0]).toBeCloseTo(5, 12);
    expect(comb[18]).toBeCloseTo(95, 12);
    expect(combOf([1])).toEqual([]);
  });

  test('takes half the swing of stable cycles, from zero at gentle onsets', () => {
    const cycle = (at: number, stable: boolean) => ({
      control: at,
      period: 1,
      stable,
      readouts: { x: { min: 1, max: 4 } },
    });
    const swings = amplitudesOf([cycle(0.4, true), cycle(0.3, false)], 'x', [onset]);
    expect(swings?.control.at(0)).toBe(0.151);
    expect(swings?.value.at(0)).toBe(0);
    expect(swings?.control.at(-1)).toBe(0.4);
    expect(swings?.value.at(-1)).toBe(1.5);
    expect(amplitudesOf([cycle(0.3, false)], 'x', [onset])).toBeNull();
  });

  test('goes like the square root of the distance between a gentle onset and the nearest cycle', () => {
    const cycle = { control: 0.051, period: 1, stable: true, readouts: { x: { min: 0, max: 4 } } };
    for (const oscillates of ['above', 'below'] as const) {
      const at = oscillates === 'above' ? cycle : { ...cycle, control: 0.251 };
      const gentle = { ...onset, value: oscillates === 'above' ? 0.011 : 0.291, oscillates };
      const swings = amplitudesOf([at], 'x', [gentle]);
      expect(swings?.control.length).toBeGreaterThan(3);
      swings?.control.forEach((c, i) => {
        const share = Math.abs(c - gentle.value) / 0.04;
        expect(swings.value[i]).toBeCloseTo(2 * Math.sqrt(share), 10);
      });
    }
    const abrupt = { ...onset, coexistence: { from: 0.1, to: 0.151 } };
    expect(amplitudesOf([{ ...cycle, control: 0.2 }], 'x', [abrupt])?.control).toEqual([0.2]);
  });
});
