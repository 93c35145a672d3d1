import { describe, expect, it } from 'vitest';
import { EngineError } from '@/lib/contracts/common';
import type { DoseMap } from '@/lib/contracts/model';
import {
  checkDoseMap,
  controlToDose,
  doseMapSpreads,
  doseToControl,
  sampleDoseMap,
} from '@/lib/sim/dose-map';

const inhibition: DoseMap = { kind: 'hill-inhibition', base: 1, ec50: 4, hill: 2 };
const table: DoseMap = { kind: 'table', dose: [0, 1, 3, 10], value: [8, 5, 4.5, 1] };

describe('dose maps', () => {
  it('inhibit to a tenth at three times EC50 with Hill steepness 2 (definition of the curve)', () => {
    expect(doseToControl(inhibition, 12)).toBeCloseTo(0.1, 14);
    expect(doseToControl(inhibition, 4)).toBe(0.5);
    expect(doseToControl(inhibition, 0)).toBe(1);
  });

  it.each([
    [1, 81],
    [2, 9],
    [4, 3],
  ])('EC90/EC10 = 81^(1/n) for n = %d (definition of the curve)', (hill, ratio) => {
    const map: DoseMap = { kind: 'hill-activation', base: 2, top: 12, ec50: 0.7, hill };
    expect(controlToDose(map, 11)! / controlToDose(map, 3)!).toBeCloseTo(ratio, 11);
  });

  it('give the pump rate of a dilution: 0.64/d in 380 mL is 10.13 mL/h (arithmetic)', () => {
    expect(controlToDose({ kind: 'linear', slope: 24 / 380, offset: 0 }, 0.64)).toBeCloseTo(
      10.1333,
      4,
    );
  });

  it('say null for what no dose reaches, never infinity', () => {
    for (const value of [0, -0.1, 1.0001]) expect(controlToDose(inhibition, value)).toBeNull();
    const floored: DoseMap = { ...inhibition, floor: 0.2 };
    expect(controlToDose(floored, 0.2)).toBeNull();
    expect(controlToDose(floored, 1)).toBe(0);
    expect(
      controlToDose({ kind: 'hill-activation', base: 1, top: 3, ec50: 1, hill: 1 }, 3),
    ).toBeNull();
    expect(controlToDose(table, 8.01)).toBeNull();
    expect(controlToDose(table, 0.99)).toBeNull();
    expect(doseToControl(table, 10.5)).toBeNull();
    expect(doseToControl(inhibition, -1)).toBeNull();
  });

  it.each<DoseMap>([
    inhibition,
    { ...inhibition, base: 3e-9, floor: 1e-10, ec50: 2e6, hill: 0.8 },
    { kind: 'hill-activation', base: 5, top: 1, ec50: 3, hill: 3.3 },
    { kind: 'linear', slope: -3, offset: 40 },
    { kind: 'identity' },
    table,
    { kind: 'table', dose: [10, 3, 1, 0], value: [1, 4.5, 5, 8] },
    { kind: 'table', dose: [0, 1, 1.01, 9], value: [0, 1e-6, 50, 50.1] },
  ])('go there and back again: %j', (map) => {
    for (let i = 0; i <= 40; i += 1) {
      const dose = i / 4;
      const control = doseToControl(map, dose);
      if (control === null) continue;
      const back = controlToDose(map, control)!;
      // Where the curve is flat a dose is known only as well as its control's last digit allows.
      const flat = Math.abs(doseToControl(map, back)! - control) <= 1e-12 * Math.abs(control);
      expect(flat || Math.abs(back - dose) <= 1e-9 * Math.max(1, dose)).toBe(true);
    }
  });

  it('pass through the rows of a table and stay monotone between them', () => {
    expect([0, 1, 3, 10].map((d) => doseToControl(table, d))).toEqual([8, 5, 4.5, 1]);
    let last = Number.POSITIVE_INFINITY;
    for (let i = 0; i <= 1000; i += 1) {
      const value = doseToControl(table, i / 100)!;
      expect(value).toBeLessThanOrEqual(last);
      last = value;
    }
  });

  it.each<[DoseMap, string]>([
    [{ kind: 'linear', slope: 0, offset: 1 }, 'control.doseMap.slope'],
    [{ ...inhibition, ec50: 0 }, 'control.doseMap.ec50'],
    [{ ...inhibition, hill: -1 }, 'control.doseMap.hill'],
    [{ ...inhibition, floor: 1 }, 'control.doseMap'],
    [{ kind: 'table', dose: [0, 1, 1], value: [1, 2, 3] }, 'control.doseMap.dose.2'],
    [{ kind: 'table', dose: [0, 1, 2], value: [1, 3, 2] }, 'control.doseMap.value.2'],
    [{ kind: 'table', dose: [0, 1, 2], value: [1, 3] }, 'control.doseMap.value'],
  ])('that are not strictly monotone are refused: %j', (map, at) => {
    try {
      checkDoseMap(map);
    } catch (error) {
      expect(error).toBeInstanceOf(EngineError);
      expect((error as EngineError).code).toBe('invalid-request');
      expect((error as EngineError).at).toBe(at);
      return;
    }
    throw new Error('accepted');
  });

  it('draw each spread number at its own quantile, and refuse a draw that is no map', () => {
    const map: DoseMap = {
      kind: 'hill-inhibition',
      base: { value: 2, spread: { kind: 'uniform', low: 1, high: 3 } },
      ec50: { value: 4, spread: { kind: 'normal', sd: 2 } },
      hill: 2,
    };
    expect(doseMapSpreads(map)).toHaveLength(2);
    expect(sampleDoseMap(map, [0.75, 0.5])).toEqual({
      kind: 'hill-inhibition',
      base: 2.5,
      ec50: 4,
      hill: 2,
      floor: 0,
    });
    expect(sampleDoseMap(map, [0.5, 0.001])).toBeNull();
  });
});
