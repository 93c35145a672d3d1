import { describe, expect, test } from 'vitest';
import { dayScale, gaps } from '@/components/frame/day-scale';

describe('day scale', () => {
  test('an ordinary day has 48 half hours, numerals each third hour, 24 at its end', () => {
    const { ticks, share } = dayScale('2026-12-01T13:32:00Z', 'Europe/Berlin');
    expect(ticks).toHaveLength(49);
    expect(ticks.filter((t) => t.kind === 'three').map((t) => t.text)).toEqual([
      '00',
      '03',
      '06',
      '09',
      '12',
      '15',
      '18',
      '21',
      '24',
    ]);
    expect(share('2026-12-01T13:32:00Z')).toBeCloseTo((14 + 32 / 60) / 24, 12);
  });
  // 29 March 2026 skips 02:00–03:00 in Berlin; 25 October repeats it.
  test('the day that loses an hour has 46 half hours and no half past two', () => {
    const { ticks, share } = dayScale('2026-03-29T10:00:00Z', 'Europe/Berlin');
    expect(ticks).toHaveLength(47);
    expect(ticks[4]!.text).toBe('03');
    expect(share('2026-03-29T12:00:00+02:00')).toBeCloseTo(11 / 23, 12);
  });
  test('the day that gains an hour has 50 half hours', () => {
    expect(dayScale('2026-10-25T10:00:00Z', 'Europe/Berlin').ticks).toHaveLength(51);
    expect(dayScale('2026-10-25T10:00:00Z', 'Asia/Kolkata').ticks).toHaveLength(49);
  });
  test('an instant of another day falls outside 0 to 1', () => {
    const { share } = dayScale('2026-12-01T13:32:00Z', 'Europe/Berlin');
    expect(share('2026-11-30T22:00:00Z')).toBeLessThan(0);
    expect(share('2026-12-02T08:00:00Z')).toBeGreaterThan(1);
  });
});

describe('closed hours', () => {
  test('are what the open ones leave uncovered, overlaps counted once', () => {
    expect(
      gaps([
        { from: 0.5, to: 0.75 },
        { from: 0.25, to: 0.6 },
      ]),
    ).toEqual([
      { from: 0, to: 0.25 },
      { from: 0.75, to: 1 },
    ]);
  });
  test('no open hours close the whole day; open hours past midnight are cut', () => {
    expect(gaps([])).toEqual([{ from: 0, to: 1 }]);
    expect(gaps([{ from: -0.2, to: 1.3 }])).toEqual([]);
  });
});
