import { describe, expect, it } from 'vitest';
import { levelCadence } from '@/lib/planner/cadence/level-cadence';
import { outlookAt } from '@/lib/planner/cadence/outlook';
import { type CadenceInput, planCadence } from '@/lib/planner/cadence/plan-cadence';
import {
  aliasOf,
  lengthToTell,
  missedPeak,
  pooledAmplitude,
  rateError,
} from '@/lib/planner/cadence/resolution';
import { minutesPerUnit } from '@/lib/planner/cadence/time-unit';

describe('resolution of a record', () => {
  it('misses 29.3, 13.4, 7.6 and 3.4 % of a peak at 4, 6, 8 and 12 readings a cycle', () => {
    // Geometry: the worst phase puts the peak halfway between two readings.
    expect([4, 6, 8, 12].map((n) => Number((100 * missedPeak(n)).toFixed(1)))).toEqual([
      29.3, 13.4, 7.6, 3.4,
    ]);
  });

  it('folds a 24 h rhythm read every 20 h to 120 h', () => {
    expect(aliasOf(24, 20)).toBeCloseTo(120, 9);
    expect(aliasOf(24, 24)).toBe(Number.POSITIVE_INFINITY);
  });

  it('keeps 0.9003 and 0.6366 of the amplitude when pooled over a quarter and half a cycle', () => {
    expect(pooledAmplitude(1, 4)).toBeCloseTo(0.9003, 4);
    expect(pooledAmplitude(1, 2)).toBeCloseTo(2 / Math.PI, 12);
    expect(pooledAmplitude(0, 2)).toBe(1);
  });

  it('knows the Cramér–Rao error of a growth rate: 48 readings, s/A 0.2, 10 cycles give 0.01414', () => {
    expect(rateError(48, 0.2, 10)).toBeCloseTo(0.01414, 5);
  });

  it('needs 8.8 cycles to call −0.0212 per cycle negative at 12 readings a cycle', () => {
    const cycles = lengthToTell(-0.0212, 0.2, 1 / 12);
    expect(cycles).toBeCloseTo(8.8, 1);
    expect(0.0212 / rateError(12 * cycles, 0.2, cycles)).toBeCloseTo(1.96, 9);
  });
});

describe('time units', () => {
  it('turns UCUM codes into minutes', () => {
    expect(['ms', 's', 'min', 'h', 'd', 'wk'].map(minutesPerUnit)).toEqual([
      1 / 60_000,
      1 / 60,
      1,
      60,
      1440,
      10080,
    ]);
  });

  it('refuses what it does not know, and words of the language', () => {
    for (const code of ['', 'D', 'hours', 'toString', '__proto__']) {
      expect(() => minutesPerUnit(code)).toThrow(/unit of time/);
    }
  });
});

/** Yeast glycolysis half a mM below onset: growth rate −0.034/min near a period of 0.6252 min. */
const yeast: CadenceInput = {
  growthRate: -1 / 29.4,
  period: { low: 0.6252, value: 0.6252, high: 0.6252 },
  settleCap: 1e6,
  recordCap: 1e6,
};

describe('cadence of a level', () => {
  it('settles 4.6 time constants: 29.4 min is 47 cycles, three of them 88 min', () => {
    expect(29.4 / 0.6252).toBeCloseTo(47, 0);
    const { settleMinutes, notes } = planCadence(yeast);
    expect(settleMinutes).toBeGreaterThanOrEqual(88);
    expect(Math.abs(settleMinutes - 4.6 * 29.4)).toBeLessThanOrEqual(5);
    expect(notes).toEqual([]);
  });

  it('says when the cap bites, and how far', () => {
    const soft = planCadence({ ...yeast, settleCap: 100 });
    expect(soft.settleMinutes).toBe(100);
    expect(soft.notes[0]).toMatchObject({ code: 'slow-settling' });
    const hard = planCadence({ ...yeast, settleCap: 60 });
    expect(hard.notes[0]!.text).toContain('88.2 min');
    const still = planCadence({ ...yeast, growthRate: 0, settleCap: 60, recordCap: 30 });
    expect(still.settleMinutes).toBe(60);
    expect(still.recordMinutes).toBeLessThanOrEqual(30);
    expect(still.recordMinutes).toBeGreaterThan(29.9);
    expect(still.notes.map((n) => n.code)).toEqual(['slow-settling', 'record-capped']);
  });

  it('never exceeds a cap by rounding', () => {
    for (const cap of [33.37, 100.3, 777.7]) {
      const found = planCadence({ ...yeast, growthRate: 1e-9, settleCap: cap, recordCap: cap });
      expect(found.settleMinutes).toBe(cap);
      expect(found.recordMinutes).toBeLessThanOrEqual(cap);
    }
  });

  it('reads at least 12 times in the shortest period, on round intervals', () => {
    for (const low of [0.004, 0.6252, 7, 95, 600, 1440, 8000, 40000]) {
      const period = { low, value: low * 1.2, high: low * 1.5 };
      const { intervalMinutes } = planCadence({ growthRate: -1 / low, period });
      expect(low / intervalMinutes).toBeGreaterThanOrEqual(12 * (1 - 1e-9));
      expect(low / intervalMinutes).toBeLessThan(24);
    }
  });

  it('covers at least 6 of the longest periods, more where damping is slow or noise high', () => {
    const period = { low: 80, value: 100, high: 130 };
    const quick = planCadence({ growthRate: -0.05, period });
    expect(quick.cycles).toBeGreaterThanOrEqual(6);
    expect(quick.cycles).toBeLessThan(6.5);
    const slow = planCadence({ growthRate: -0.0001, period });
    expect(slow.cycles).toBeGreaterThan(quick.cycles);
    const noisy = planCadence({ growthRate: -0.0001, period, noiseShare: 0.4 });
    expect(noisy.cycles).toBeGreaterThan(slow.cycles);
  });

  it('records 8.8 cycles for −0.0212 per cycle at 12 readings a cycle', () => {
    const period = { low: 120, value: 120, high: 120 };
    const found = planCadence({ growthRate: -0.0212 / 120, period });
    expect(found.intervalMinutes).toBe(10);
    expect(found.cycles).toBeCloseTo(8.8, 0);
    expect(found.readings).toBe(Math.round(found.recordMinutes / 10) + 1);
  });

  it('warns when the rig cannot read six times a cycle, and names the loss', () => {
    const period = { low: 40, value: 40, high: 40 };
    const found = planCadence({ growthRate: -0.1, period, shortestInterval: 10 });
    expect(found.intervalMinutes).toBe(10);
    expect(found.notes[0]).toMatchObject({ code: 'interval-limited' });
    expect(found.notes[0]!.text).toContain('29 %');
    const blind = planCadence({ growthRate: -0.1, period, shortestInterval: 30 });
    expect(blind.notes[0]!.text).toContain('slower one');
  });

  it('does not take an unknown rate for a rate of zero', () => {
    const found = planCadence({ growthRate: null, period: { low: 10, value: 10, high: 10 } });
    expect(found).toMatchObject({ settleMinutes: 100 });
    expect(found.cycles).toBeCloseTo(6, 1);
    expect(found.notes[0]!.text).toContain('does not reach this level');
  });

  it('still plans where no rhythm is predicted', () => {
    const found = planCadence({ growthRate: -0.01, period: null });
    expect(found.notes.map((n) => n.code)).toContain('no-period');
    expect(found.recordMinutes).toBeGreaterThanOrEqual(600);
  });
});

describe('outlook at a level', () => {
  const answer = {
    branch: {
      control: [0, 1, 2, 3],
      growthRate: [-2, -1, 0, 1],
      frequency: [0, 2 * Math.PI, 4 * Math.PI, 4 * Math.PI],
      stable: [true, true, true, false],
      steadyState: {},
    },
    cycles: [
      { control: 2.5, period: 0.7, stable: true, readouts: { x: { min: 1, max: 5 } } },
      { control: 3, period: 0.9, stable: true, readouts: { x: { min: 0, max: 6 } } },
    ],
    onsets: [],
  };

  it('interpolates rate and period, in minutes', () => {
    const seen = outlookAt(answer, 1.5, 'h', 0.25);
    expect(seen.growthRate).toBeCloseTo(-0.5 / 60, 12);
    expect(seen.period!.value).toBeCloseTo(60 / 1.5, 9);
    expect(seen.period!.low).toBeCloseTo(60 / 1.5 / 1.25, 9);
    expect(seen.amplitude).toBeNull();
  });

  it('takes the nearest stable cycle on the oscillating side', () => {
    const seen = outlookAt(answer, 2.6, 'min', 0);
    expect(seen.period).toEqual({ low: expect.closeTo(0.5, 9), value: 0.7, high: 0.7 });
    expect(seen.amplitude).toEqual({ x: 2 });
  });

  it('falls back on the onset where the leading root is real, or says nothing', () => {
    expect(outlookAt(answer, 0.5, 'min').period).toBeNull();
    type Onsets = Parameters<typeof outlookAt>[0]['onsets'];
    const onsets = [{ value: 2, period: 0.5 }] as Onsets;
    expect(outlookAt({ ...answer, onsets }, 0.5, 'min', 0).period!.value).toBe(0.5);
    expect(outlookAt(answer, 9, 'min').growthRate).toBeNull();
  });

  it('joins outlook, readout noise and cadence for one level', () => {
    const ask = { answer, timeUnit: 'h', control: 2.05 };
    const clean = levelCadence({ ...ask, readouts: [{ symbol: 'x', noiseSd: 0.02 }] });
    const noisy = levelCadence({ ...ask, readouts: [{ symbol: 'x', noiseSd: 2 }] });
    expect(clean.cycles).toBeGreaterThanOrEqual(6);
    expect(noisy.recordMinutes).toBeGreaterThan(clean.recordMinutes);
    // The cycle's amplitude is 2, so noise of 0.4 is the default share of 0.2.
    const usual = levelCadence({ ...ask, readouts: [{ symbol: 'x', noiseSd: 0.4 }] });
    expect(usual).toEqual(levelCadence({ ...ask, readouts: [{ symbol: 'x' }] }));
    const capped = levelCadence({ ...ask, readouts: [], settleCap: 10, recordCap: 60 });
    expect(capped.settleMinutes).toBe(10);
    expect(capped.recordMinutes).toBeLessThanOrEqual(60);
  });
});
