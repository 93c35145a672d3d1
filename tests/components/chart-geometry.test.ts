import { describe, expect, test } from 'vitest';
import {
  axisFromZero,
  axisName,
  axisOver,
  dodge,
  piecesByStability,
} from '@/components/charts/axis';
import { placeAtRight, placeCurveName, placeNames } from '@/components/charts/place-names';

describe('axes', () => {
  test('from zero: ticks reach the largest value and the domain leaves room above', () => {
    const axis = axisFromZero(35);
    expect(axis.ticks.map((t) => t.text)).toEqual(['10', '20', '30', '40']);
    expect(axis.domain[0]).toBe(0);
    expect(axis.domain[1]).toBeGreaterThan(40);
  });
  test.each([0, Number.NaN, -3])('no positive value (%s) still gives an axis', (largest) => {
    const axis = axisFromZero(largest);
    expect(axis.domain[1]).toBeGreaterThan(0);
    expect(axis.ticks.length).toBeGreaterThan(1);
  });
  test('over values: zero is held when asked for, equal values get room', () => {
    const axis = axisOver([-3, -1], true);
    expect(axis.domain[0]).toBeLessThan(-3);
    expect(axis.domain[1]).toBeGreaterThan(0);
    expect(axis.ticks.map((t) => t.text)).toContain('0');
    const [low, high] = axisOver([5, 5], false).domain;
    expect(high).toBeGreaterThan(low);
    expect(axisOver([], false).ticks.length).toBeGreaterThan(0);
  });
  test.each([1e-9, 1, 1e9])('ticks lie inside the domain at a scale of %s', (k) => {
    const { domain, ticks } = axisOver([-2 * k, 7 * k], true);
    expect(ticks.length).toBeGreaterThan(2);
    for (const t of ticks) {
      expect(t.value).toBeGreaterThanOrEqual(domain[0]);
      expect(t.value).toBeLessThanOrEqual(domain[1]);
    }
  });
});

describe('the name of an axis', () => {
  test('has its unit, and no comma where there is none', () => {
    expect(axisName('dilution rate', '/d')).toBe('dilution rate, /d');
    expect(axisName('promoter strength', '')).toBe('promoter strength');
  });
});

describe('curves', () => {
  test('carry their name where neither they nor anything else passes', () => {
    const curve = [
      { x: 100, y: 200 },
      { x: 300, y: 100 },
      { x: 700, y: 100 },
    ];
    const bar = { left: 240, right: 241, top: 0, bottom: 200 };
    const chart = { from: 116, width: 800, base: 200 };
    const at = placeCurveName('predicted amplitude', curve, [bar], chart);
    if (!at) throw new Error('there is room');
    const [right, top, bottom] = [at.x + 19 * 6, at.y - 12, at.y + 4];
    expect(at.x > 241 || right < 240).toBe(true);
    const heightAt = (x: number) => Math.max(100, 200 - (x - 100) / 2);
    for (let x = at.x; x <= right; x += 1) {
      expect(heightAt(x) < top || heightAt(x) > bottom).toBe(true);
    }
    const full = { left: 0, right: 800, top: 0, bottom: 200 };
    expect(placeCurveName('predicted amplitude', curve, [full], chart)).toBeNull();
  });
  test('are cut where stability changes, sharing the point between', () => {
    const pieces = piecesByStability([0, 1, 2, 3], [5, 6, 7, 8], [true, true, false, false]);
    expect(pieces.map((p) => p.stable)).toEqual([true, false]);
    expect(pieces[1]!.points[0]).toEqual({ x: 1, y: 6 });
  });
  test('are interrupted where there is no value', () => {
    const pieces = piecesByStability([0, 1, 2, 3], [5, null, 7, 8], undefined);
    expect(pieces.map((p) => p.points.length)).toEqual([1, 2]);
  });
});

describe('a word beside the zero line', () => {
  test('stands at the right end, and moves left of a curve that passes there', () => {
    const rising = [
      { x: 300, y: 400 },
      { x: 400, y: 0 },
    ];
    expect(placeAtRight('dies away', 100, [], [], 400)).toBe(400);
    expect(placeAtRight('dies away', 100, rising, [], 400)).toBeLessThan(380);
    const full = { left: 0, right: 400, top: 0, bottom: 400 };
    expect(placeAtRight('dies away', 100, [], [full], 400)).toBeNull();
  });
});

describe('marks', () => {
  test('of one place stand symmetrically about it', () => {
    expect([0, 1, 2].map((i) => dodge(i, 3, 8))).toEqual([-8, 0, 8]);
    expect(dodge(0, 1)).toBe(0);
  });
  test('names keep clear of other marks and of the ends', () => {
    const names = placeNames(
      [
        { x: 100, y: 100, label: 'sustained' },
        { x: 140, y: 100 },
        { x: 380, y: 100, label: 'undecided' },
      ],
      400,
      200,
    );
    expect(names[0]!.y !== 99 || names[0]!.end).toBe(true);
    expect(names[1]).toBeNull();
    expect(names[2]!.end).toBe(true);
  });
  test('a name that fits nowhere is left out', () => {
    expect(placeNames([{ x: 30, y: 20, label: 'a very long name of a mark' }], 60, 40)).toEqual([
      null,
    ]);
  });
});
