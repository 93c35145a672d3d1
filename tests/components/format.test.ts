import { describe, expect, test } from 'vitest';
import {
  clockText,
  countdown,
  dayText,
  decimalsFor,
  decimalsOfStep,
  durationText,
  figure,
  fixed,
  intervalText,
  offsetText,
  shareOfDay,
  spanText,
  unitText,
  withUnit,
  zoneText,
} from '@/lib/format';

const NNBSP = '\u202f';

describe('figures', () => {
  test('a true minus sign, and no minus zero', () => {
    expect(fixed(-0.15, 2)).toBe('\u22120.15');
    expect(fixed(-0.001, 2)).toBe('0.00');
    expect(fixed(Number.NaN, 2)).toBe('\u2013');
    expect(fixed(412, -1)).toBe('410');
  });
  test('sensible digits without trailing zeros', () => {
    expect(figure(0.6400001)).toBe('0.64');
    expect(figure(15.833)).toBe('15.8');
    expect(figure(999.96)).toBe('1000');
    expect(figure(1250)).toBe('1250');
    expect(figure(0)).toBe('0');
    expect(figure(2.5e-7)).toBe('2.5\u00d710\u207b\u2077');
  });
  // Worked example of the rule's source: 0.827 ± 0.119 → 0.83 ± 0.12; 0.827 ± 0.367 → 0.8 ± 0.4;
  // 0.827 ± 0.950 rounds like 1.00 → one decimal.
  test('decimals follow the half-width', () => {
    expect(decimalsFor(0.119)).toBe(2);
    expect(decimalsFor(0.367)).toBe(1);
    expect(decimalsFor(0.95)).toBe(1);
    expect(decimalsFor(95)).toBe(-1);
    expect(decimalsFor(0)).toBe(2);
  });
  test('decimals of a tick step', () => {
    expect([0.05, 0.2, 1, 2.5, 500].map(decimalsOfStep)).toEqual([2, 1, 0, 1, 0]);
  });
});

describe('units', () => {
  test.each([
    ['umol/L', '\u00b5mol/L'],
    ['uA/cm2', '\u00b5A/cm\u00b2'],
    ['1/d', '/d'],
    ['/d', '/d'],
    ['Cel', '\u00b0C'],
    ['{cells}/mL', 'cells/mL'],
    ['10*6/mL', '10\u2076/mL'],
    ['mol.L-1', 'mol\u00b7L\u207b\u00b9'],
    ['mL/h', 'mL/h'],
    ['%', '%'],
    ['1', ''],
    ['', ''],
  ])('%s prints as %s', (code, text) => expect(unitText(code)).toBe(text));
  test('a narrow no-break space stands before the unit', () => {
    expect(withUnit('12', 'h')).toBe(`12${NNBSP}h`);
    expect(withUnit('12', null)).toBe('12');
  });
});

describe('intervals', () => {
  test('as the direction writes them', () => {
    expect(intervalText({ value: 12.42, low: 10.93, high: 14.07 })).toBe('12.4 (10.9\u201314.1)');
    expect(intervalText({ value: -0.06, low: -0.151, high: 0.03 })).toBe(
      '\u22120.06 (\u22120.15 to 0.03)',
    );
    expect(intervalText({ value: 1e-6, low: 0.2e-6, high: 4e-6 }, { unit: 'mol/L' })).toBe(
      `1.0 (0.2\u20134.0)\u00d710\u207b\u2076${NNBSP}mol/L`,
    );
    expect(intervalText({ value: 0.48, low: 0.32, high: 0.64 }, { unit: '/d' })).toBe(
      `0.48 (0.32\u20130.64)${NNBSP}/d`,
    );
  });
});

describe('times in the zone of the lab', () => {
  const winter = '2026-12-01T13:32:00Z';
  test('Berlin in winter and in summer', () => {
    expect(dayText(winter, 'Europe/Berlin')).toBe('Tue 1 December');
    expect(clockText(winter, 'Europe/Berlin')).toBe('14:32');
    expect(zoneText(winter, 'Europe/Berlin')).toBe('Berlin, UTC+1');
    expect(zoneText('2026-07-01T12:00:00Z', 'Europe/Berlin')).toBe('Berlin, UTC+2');
  });
  test('offsets west of Greenwich and of half an hour', () => {
    expect(offsetText(winter, 'America/St_Johns')).toBe('UTC\u22123:30');
    expect(zoneText(winter, 'America/New_York')).toBe('New York, UTC\u22125');
    expect(offsetText(winter, 'UTC')).toBe('UTC');
  });
  // 29 March 2026: Berlin skips 02:00–03:00, so noon is 11 of 23 hours; 25 October repeats an hour.
  test('the share of a day counts days of 23 and 25 hours by their length', () => {
    expect(shareOfDay('2026-03-29T12:00:00+02:00', 'Europe/Berlin')).toBeCloseTo(11 / 23, 12);
    expect(shareOfDay('2026-10-25T12:00:00+01:00', 'Europe/Berlin')).toBeCloseTo(13 / 25, 12);
  });
  test('spans name the other day', () => {
    expect(spanText(winter, '2026-12-01T14:00:00Z', 'Europe/Berlin')).toBe('14:32\u201315:00');
    expect(spanText(winter, '2026-12-01T23:30:00Z', 'Europe/Berlin')).toBe(
      '14:32 to Wed 2 Dec, 00:30',
    );
  });
  test('an unreadable time is refused', () => {
    expect(() => clockText('yesterday', 'Europe/Berlin')).toThrow(RangeError);
  });
});

describe('durations', () => {
  test.each([
    [0.5, `30${NNBSP}s`],
    [1.5, `1${NNBSP}min 30${NNBSP}s`],
    [45, `45${NNBSP}min`],
    [59.7, `1${NNBSP}h`],
    [200, `3${NNBSP}h 20${NNBSP}min`],
    [60 * 24 * 12 + 240, `12${NNBSP}d 4${NNBSP}h`],
    [-10, `\u221210${NNBSP}min`],
  ])('%s minutes', (minutes, text) => expect(durationText(minutes)).toBe(text));
  test('the bench counter', () => {
    expect(countdown(220)).toEqual({ text: '03:40', over: false });
    expect(countdown(3820)).toEqual({ text: '1:03:40', over: false });
    expect(countdown(-5)).toEqual({ text: '00:05', over: true });
  });
});
