import { describe, expect, test } from 'vitest';
import { bandStops, combValues, lineStops } from '@/components/ribbon/band';
import { commonest, placeLevels } from '@/components/ribbon/clusters';
import { DIMENSIONS, monoWidth } from '@/components/ribbon/dimensions';
import { ribbonTexts } from '@/components/ribbon/labels';
import { niceStep, scaleX, ticksOf } from '@/components/ribbon/scale';
import { ribbonSentence } from '@/components/ribbon/sentence';
import type { PredictedOnset, RibbonData } from '@/components/ribbon/types';
import {
  envelopeAt,
  schematicAmplitude,
  unstableStretches,
  wavePath,
} from '@/components/ribbon/wave';

const lower: PredictedOnset = { value: 0.151, low: 0.112, high: 0.208, oscillates: 'above' };
const upper: PredictedOnset = { value: 0.97, low: 0.905, high: 1.032, oscillates: 'below' };
const data: RibbonData = {
  from: 0,
  to: 1.3,
  unit: '/d',
  label: 'dilution rate',
  onsets: [lower, upper],
  observed: [{ value: 0.48, low: 0.32, high: 0.64 }],
  levels: [],
};
const page = DIMENSIONS.page;
const W = 1374;
const x = scaleX(0, 1.3, W, page.pad);

/** Points of a path made of M and L commands. */
const points = (d: string) =>
  [...d.matchAll(/[ML]([-\d.]+) ([-\d.]+)/g)].map((m) => ({ x: Number(m[1]), y: Number(m[2]) }));

describe('scale', () => {
  test('ends lie at the pads, and the scale is linear', () => {
    expect(x(0)).toBe(16);
    expect(x(1.3)).toBe(W - 16);
    expect(x(0.65)).toBeCloseTo(W / 2, 9);
  });
  test('steps are 1, 2 or 5 times a power of ten', () => {
    expect([0.11, 0.2, 0.3, 7, 11].map(niceStep)).toEqual([0.2, 0.2, 0.5, 10, 20]);
  });
  test('the page scale of the drawing: numerals each 0.2, ticks each 0.05', () => {
    const ticks = ticksOf(0, 1.3, W, page.pad);
    expect(ticks.filter((t) => t.major).map((t) => t.text)).toEqual([
      '0',
      '0.2',
      '0.4',
      '0.6',
      '0.8',
      '1',
      '1.2',
    ]);
    expect(ticks[1]!.value).toBeCloseTo(0.05, 12);
  });
  test.each([1e-9, 1e9])('never a smear of ticks at a scale of %s', (k) => {
    const ticks = ticksOf(-3 * k, 5 * k, 480, 6);
    expect(ticks.length).toBeGreaterThan(4);
    expect(ticks.length).toBeLessThan(60);
  });
  test('an empty range or no room gives no ticks', () => {
    expect(ticksOf(1, 1, 480, 6)).toEqual([]);
    expect(ticksOf(0, 1, 10, 6)).toEqual([]);
  });
});

describe('wave', () => {
  test('onsets open and close the unstable stretches by their side', () => {
    expect(unstableStretches(data).map((s) => [s.from, s.to])).toEqual([[0.151, 0.97]]);
    expect(
      unstableStretches({ from: 0, to: 2, onsets: [upper] }).map((s) => [s.from, s.to]),
    ).toEqual([[0, 0.97]]);
    expect(
      unstableStretches({ from: 0, to: 2, onsets: [lower] }).map((s) => [s.from, s.to]),
    ).toEqual([[0.151, 2]]);
    expect(unstableStretches({ from: 0, to: 2, onsets: [] })).toEqual([]);
  });
  test('a gentle onset follows the square root law', () => {
    const [s] = unstableStretches({ from: 0, to: 2, onsets: [{ ...lower, value: 1 }] });
    const ratio = schematicAmplitude(1.04, s!) / schematicAmplitude(1.01, s!);
    expect(ratio).toBeCloseTo(2, 9);
    expect(schematicAmplitude(0.99, s!)).toBe(0);
  });
  test('an abrupt onset jumps at its fold, before the onset', () => {
    const abrupt = { ...lower, value: 1, coexistence: { from: 0.6, to: 1 } };
    const [s] = unstableStretches({ from: 0, to: 2, onsets: [abrupt] });
    expect(schematicAmplitude(0.59, s!)).toBe(0);
    expect(schematicAmplitude(0.61, s!)).toBeGreaterThan(0.5);
    const wave = wavePath({ ...data, to: 2, onsets: [abrupt] }, page, W);
    expect(wave.behind).toHaveLength(1);
    const flat = points(wave.line).filter((p) => p.x < scaleX(0, 2, W, 16)(1) - 0.01);
    expect(flat.every((p) => p.y === page.centre)).toBe(true);
  });
  test('the line is flat outside the onsets and stays within its zone', () => {
    const line = points(wavePath(data, page, W).line);
    for (const p of line) {
      if (p.x < x(0.151) - 0.01 || p.x > x(0.97) + 0.01) expect(p.y).toBe(page.centre);
      expect(Math.abs(p.y - page.centre)).toBeLessThanOrEqual(page.amplitude + 0.01);
    }
    expect(line[0]!.x).toBe(16);
    expect(line.at(-1)!.x).toBe(W - 16);
  });
  test('it rises first after the onset and crosses again after half a wavelength', () => {
    const line = points(wavePath(data, page, W).line);
    const quarter = line.find((p) => p.x > x(0.151) + 4)!;
    expect(quarter.y).toBeLessThan(page.centre);
    const second = line.find((p) => p.x > x(0.151) + 14)!;
    expect(second.y).toBeGreaterThan(page.centre);
  });
  test('a given envelope is interpolated relative to its largest value', () => {
    const envelope = { control: [0, 1, 2], value: [0, 10, 5] };
    expect(envelopeAt(envelope, 0.5)).toBeCloseTo(0.5, 12);
    expect(envelopeAt(envelope, 1.5)).toBeCloseTo(0.75, 12);
    expect(envelopeAt(envelope, 3)).toBe(0);
    expect(envelopeAt({ control: [0, 1], value: [0, 0] }, 0.5)).toBe(0);
  });
});

describe('band', () => {
  const nineteen = Array.from({ length: 19 }, (_, i) => 5 * (i + 1));
  test('the page comb has every quantile, the card nine from 5 to 95 %', () => {
    const onset = { ...lower, quantiles: nineteen };
    expect(combValues(onset, 'all')).toEqual(nineteen);
    const nine = combValues(onset, 9);
    expect(nine).toHaveLength(9);
    expect([nine[0], nine[4], nine[8]]).toEqual([5, 50, 95]);
    expect(combValues(lower, 9)).toEqual([]);
  });
  test('the band is clear at its ends and darkest at the onset', () => {
    expect(bandStops(lower).map((s) => s.opacity)).toEqual([0, 0.09, 0.2, 0.09, 0]);
  });
  test('the line turns to sustained on the side that oscillates', () => {
    expect(lineStops([upper, lower]).map((stop) => stop.token)).toEqual([
      'steady',
      'sustained',
      'sustained',
      'steady',
    ]);
  });
});

describe('levels', () => {
  const run = (state: 'steady' | 'damped' | 'sustained', direction?: 'up' | 'down') => ({
    control: 0.64,
    state,
    direction,
  });
  test('rising and falling arms stand in their own lanes', () => {
    const { marks } = placeLevels([run('steady', 'up'), run('steady', 'down')], x, page, 'page');
    expect(marks.map((m) => m.y).sort()).toEqual([77.5, 90.5]);
  });
  test('three at one place stand side by side on the page, about it', () => {
    const { marks } = placeLevels([run('steady'), run('damped'), run('steady')], x, page, 'page');
    expect(marks).toHaveLength(3);
    const mean = marks.reduce((sum, m) => sum + m.x, 0) / 3;
    expect(mean).toBeCloseTo(x(0.64), 9);
    expect(marks[1]!.x - marks[0]!.x).toBeGreaterThanOrEqual(page.mark);
  });
  test('above three it is one mark and a count', () => {
    const four = [run('steady'), run('steady'), run('damped'), run('steady')];
    const { marks } = placeLevels(four, x, page, 'page');
    expect(marks).toMatchObject([{ state: 'steady', count: 4 }]);
  });
  test('card and list show the commonest, a tie is undecided', () => {
    expect(commonest(['steady', 'damped', 'steady'])).toBe('steady');
    expect(commonest(['steady', 'damped'])).toBe('undecided');
    const { marks } = placeLevels([run('steady'), run('damped')], x, DIMENSIONS.card, 'card');
    expect(marks).toMatchObject([{ state: 'undecided', count: null }]);
  });
  test('planned levels are notches, never marks', () => {
    const { marks, notches } = placeLevels([{ control: 0.5, state: 'planned' }], x, page, 'page');
    expect(marks).toEqual([]);
    expect(notches[0]!.x).toBeCloseTo(x(0.5), 9);
  });
});

describe('texts', () => {
  const texts = (over: Partial<RibbonData> = {}, width = W) =>
    ribbonTexts({ ...data, ...over }, scaleX(0, 1.3, width, 16), page, width, 'page', true);
  test('labels as drawn', () => {
    const shown = texts().map((t) => t.text);
    expect(shown).toContain('predicted 0.151 (0.112\u20130.208) /d');
    expect(shown).toContain('0.970 (0.905\u20131.032) /d');
    expect(shown).toContain('observed 0.48 (0.32\u20130.64) /d');
    expect(shown).toContain('1.3 /d');
  });
  test('numerals under a label drop out, those clear of it stay', () => {
    const numerals = texts()
      .filter((t) => t.kind === 'numeral')
      .map((t) => t.text);
    expect(numerals).not.toContain('0.4');
    expect(numerals).not.toContain('0.6');
    expect(numerals).toContain('0.8');
  });
  test.each([360, 500, 760, 1374, 1840])('no two texts of a line meet at %s px', (width) => {
    for (const y of [page.upperText, page.lowerText]) {
      const boxes = texts({}, width)
        .filter((t) => t.y === y)
        .map((t) => {
          const w = monoWidth(t.text, t.kind === 'numeral' ? 11 : 12);
          const from = t.anchor === 'start' ? t.x : t.anchor === 'end' ? t.x - w : t.x - w / 2;
          return { from, to: from + w };
        })
        .sort((a, b) => a.from - b.from);
      for (let i = 1; i < boxes.length; i++)
        expect(boxes[i]!.from).toBeGreaterThanOrEqual(boxes[i - 1]!.to);
      for (const box of boxes) expect(box.to).toBeLessThanOrEqual(width);
    }
  });
  test('two close pointers both keep their figures, and no label lies on a pointer', () => {
    const close = [
      { value: 0.5, low: 0.48, high: 0.52, oscillates: 'above' as const },
      { value: 0.55, low: 0.53, high: 0.57, oscillates: 'below' as const },
    ];
    const shown = texts({ onsets: close, observed: close.map(({ oscillates: _, ...o }) => o) });
    expect(shown.filter((t) => t.kind === 'predicted')).toHaveLength(2);
    expect(shown.filter((t) => t.kind === 'observed')).toHaveLength(2);
    const [first] = shown.filter((t) => t.kind === 'predicted');
    expect(first!.anchor).toBe('end');
  });
  test('without an onset there are words', () => {
    expect(texts({ onsets: [] }).map((t) => t.text)).toContain('no onset predicted in this range');
  });
  test('a stale prediction names its version', () => {
    expect(texts({ stale: 'System v2' }).some((t) => t.text.includes('from System v2'))).toBe(true);
  });
});

describe('sentence', () => {
  test('says range, prediction, observation, levels, ceiling and the level at the bench', () => {
    const text = ribbonSentence({
      ...data,
      ceiling: 1.25,
      here: 0.64,
      levels: [
        { control: 0.1, state: 'steady' },
        { control: 0.2, state: 'planned' },
        { control: 0.3, state: 'planned' },
      ],
    });
    expect(text).toBe(
      'Dilution rate from 0 to 1.3\u202f/d. Onsets predicted at 0.151 (0.112\u20130.208) /d (oscillates above) and 0.970 (0.905\u20131.032) /d (oscillates below). Observed at 0.48 (0.32\u20130.64) /d. Levels: 2 planned and 1 steady. Ceiling at 1.25\u202f/d. This level: 0.64\u202f/d.',
    );
  });
  test('says so when there is neither onset nor observation', () => {
    const text = ribbonSentence({ ...data, onsets: [], observed: [] });
    expect(text).toContain('No onset predicted in this range.');
    expect(text).toContain('No onset observed yet.');
  });
});
