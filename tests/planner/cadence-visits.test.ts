import { describe, expect, it } from 'vitest';
import { visitTimes } from '@/lib/planner/cadence/visit-times';

const DAY = 1440;
const kinds = (visits: { kind: string }[]) => visits.map((v) => v.kind);

describe('a rig that records by itself', () => {
  it('is visited to set the dose and to collect', () => {
    const visits = visitTimes({
      settleMinutes: 60,
      recordMinutes: 120,
      intervalMinutes: 1,
      recordsItself: true,
    });
    expect(kinds(visits)).toEqual(['set dose', 'collect']);
    expect(visits[1]).toMatchObject({ atMinutes: 180, earlyMinutes: 0 });
  });

  it('is looked at daily when the run lasts over a day', () => {
    const visits = visitTimes({
      settleMinutes: DAY,
      recordMinutes: 4 * DAY,
      intervalMinutes: 30,
      recordsItself: true,
    });
    expect(visits.filter((v) => v.kind === 'check').map((v) => v.atMinutes / DAY)).toEqual([
      1, 2, 3, 4,
    ]);
    expect(visits.at(-1)).toMatchObject({ kind: 'collect', atMinutes: 5 * DAY });
  });
});

describe('sampling by hand', () => {
  for (const interval of [120, 180, 480, 720, DAY, 2 * DAY]) {
    it(`comes within a quarter of the interval of ${interval} min, in order, all in the record`, () => {
      const settle = 2 * DAY;
      const record = 40 * interval;
      const visits = visitTimes({
        settleMinutes: settle,
        recordMinutes: record,
        intervalMinutes: interval,
        recordsItself: false,
      });
      const samples = visits.filter((v) => v.kind === 'sample');
      expect(samples).toHaveLength(41);
      samples.forEach((v, i) => {
        const even = settle + i * interval;
        expect(v.atMinutes - v.earlyMinutes).toBeGreaterThanOrEqual(even - interval / 4 - 1e-9);
        expect(v.atMinutes + v.lateMinutes).toBeLessThanOrEqual(even + interval / 4 + 1e-9);
        expect(v.atMinutes - v.earlyMinutes).toBeGreaterThanOrEqual(settle);
        expect(v.atMinutes).toBeLessThanOrEqual(settle + record);
        const next = samples[i + 1];
        if (next) {
          const end = v.atMinutes + v.lateMinutes + v.minutes;
          expect(end).toBeLessThanOrEqual(next.atMinutes - next.earlyMinutes);
        }
      });
      expect(kinds(visits).slice(0, 2)).toEqual(['set dose', 'check']);
    });
  }

  it('does not fall on the same hour every day: a daily rhythm shows in the spectral window', () => {
    const samples = visitTimes({
      settleMinutes: DAY,
      recordMinutes: 30 * DAY,
      intervalMinutes: DAY,
      recordsItself: false,
    }).filter((v) => v.kind === 'sample');
    // Strict daily sampling has |mean e^(2πit/day)| = 1: a daily rhythm could not be told from a constant.
    const angle = (t: number) => (2 * Math.PI * t) / DAY;
    const re = samples.reduce((s, v) => s + Math.cos(angle(v.atMinutes)), 0) / samples.length;
    const im = samples.reduce((s, v) => s + Math.sin(angle(v.atMinutes)), 0) / samples.length;
    expect(Math.hypot(re, im)).toBeLessThan(0.85);
    const hours = samples.map((v) => Math.floor((v.atMinutes % DAY) / 60));
    expect(new Set(hours).size).toBeGreaterThanOrEqual(8);
  });

  it('is one stay when samples are close and the whole is short', () => {
    const visits = visitTimes({
      settleMinutes: 30,
      recordMinutes: 120,
      intervalMinutes: 5,
      recordsItself: false,
    });
    expect(visits).toHaveLength(1);
    expect(visits[0]).toMatchObject({ kind: 'set dose', atMinutes: 0, minutes: 150 });
    expect(visits[0]!.label).toContain('25 readings');
  });

  it('is a dose and, after a long settling, one stay', () => {
    const visits = visitTimes({
      settleMinutes: 600,
      recordMinutes: 120,
      intervalMinutes: 5,
      recordsItself: false,
    });
    expect(kinds(visits)).toEqual(['set dose', 'sample']);
    expect(visits[1]).toMatchObject({ atMinutes: 600, minutes: 120 });
  });

  it('is shared in shifts, or visited, when nobody could stay so long', () => {
    const shifts = visitTimes({
      settleMinutes: 60,
      recordMinutes: 1200,
      intervalMinutes: 5,
      recordsItself: false,
    });
    expect(shifts.slice(1).map((v) => v.minutes)).toEqual([240, 240, 240, 240, 240]);
    const visits = visitTimes({
      settleMinutes: 60,
      recordMinutes: 3600,
      intervalMinutes: 60,
      recordsItself: false,
    });
    expect(visits.filter((v) => v.kind === 'sample')).toHaveLength(61);
  });

  it('draws the first sample with the dose when there is nothing to settle', () => {
    const visits = visitTimes({
      settleMinutes: 0,
      recordMinutes: 480,
      intervalMinutes: 120,
      recordsItself: false,
    });
    expect(visits[0]!.label).toBe('Set the dose. Sample 1 of 5');
    expect(visits).toHaveLength(5);
  });
});
