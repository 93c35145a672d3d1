import { describe, expect, test } from 'vitest';
import { checkSystem } from '@/lib/server/systems/check-system';
import { library } from '@/lib/sim/library';
import { brusselator, brusselatorControl } from './studies-fixture';

const withX = (x: string) => ({ ...brusselator, equations: { ...brusselator.equations, x } });
const ats = (x: string) => checkSystem(withX(x), brusselatorControl).map((p) => p.at);

describe('the check before a system is saved', () => {
  test('finds nothing to mend in a published system', () => {
    expect(checkSystem(brusselator, brusselatorControl)).toEqual([]);
    for (const { id, model, control } of library) {
      expect([id, checkSystem(model, control)]).toEqual([id, []]);
    }
  });

  test('names the very equation, and every one of them', () => {
    const equations = { x: 'A +* B', y: 'B*z' };
    const problems = checkSystem({ ...brusselator, equations }, brusselatorControl);
    expect(problems.map((p) => p.at)).toEqual(['model.equations.x', 'model.equations.y']);
  });

  test('refuses an equation that blows up at the start, and says how', () => {
    const [zero] = checkSystem(withX('A/(x - 1)'), brusselatorControl);
    expect(zero).toMatchObject({ at: 'model.equations.x' });
    expect(zero?.message).toMatch(/infinite \(a division by zero/);
    expect(checkSystem(withX('log(x - 2)'), brusselatorControl)[0]?.message).toMatch(/undefined/);
    expect(ats('exp(1000*B)')).toEqual(['model.equations.x']);
  });

  test('finds what blows up only somewhere in the control range', () => {
    const [inside] = checkSystem(withX('A/(B - 2)'), brusselatorControl);
    expect(inside?.message).toContain('where B = 2');
    expect(ats('A/(B - 5)')).toEqual([]);
  });

  test('finds a control that is no parameter, a bad dose map and a negative delay', () => {
    const wrong = checkSystem(brusselator, { ...brusselatorControl, symbol: 'C' });
    expect(wrong.map((p) => p.at)).toEqual(['control.symbol']);
    const map = { kind: 'linear' as const, slope: 0, offset: 1 };
    const flat = checkSystem(brusselator, { ...brusselatorControl, doseMap: map });
    expect(flat.map((p) => p.at)).toEqual(['control.doseMap.slope']);
    expect(checkSystem(withX('A - x(t - (B - 2))'), brusselatorControl)).toHaveLength(1);
  });

  test('refuses a spread that cannot hold its own value', () => {
    const spread = { kind: 'uniform' as const, low: 2, high: 3 };
    const [a, b] = brusselator.parameters;
    const parameters = [{ ...a!, spread }, b!];
    const found = checkSystem({ ...brusselator, parameters }, brusselatorControl);
    expect(found.map((p) => p.at)).toEqual(['model.parameters.0.spread']);
  });
});
