import { describe, expect, it } from 'vitest';
import type { SystemModel } from '@/lib/contracts/model';
import type { Branch } from '@/lib/contracts/predict';
import { cyclesAlongBranch } from '@/lib/sim/cycles/along-branch';
import { settledCycle } from '@/lib/sim/cycles/settled-cycle';
import { compileModel } from '@/lib/sim/equations/compile';

function model(
  equations: Record<string, string>,
  start: number[],
  parameters: Record<string, number>,
): SystemModel {
  return {
    name: 'test',
    timeUnit: 's',
    variables: Object.keys(equations).map((symbol, i) => ({ symbol, start: start[i]! })),
    parameters: Object.entries(parameters).map(([symbol, value]) => ({ symbol, value })),
    equations,
  };
}

/** r′ = r(mu − r²), φ′ = w: a cycle of radius √mu and period 2π/w, exact. */
const circle = model(
  { x: 'mu*x - w*y - x*(x^2 + y^2)', y: 'w*x + mu*y - y*(x^2 + y^2)' },
  [0.1, 0],
  { mu: 1, w: 2 },
);
/** The branch at rest in 0, unstable above an onset. */
function restBranch(from: number, to: number, onset: number, frequency: number): Branch {
  const control = Array.from({ length: 41 }, (_, i) => from + ((to - from) * i) / 40);
  return {
    control,
    growthRate: control.map((c) => c - onset),
    frequency: control.map(() => frequency),
    stable: control.map((c) => c < onset),
    steadyState: { x: control.map(() => 0), y: control.map(() => 0) },
  };
}

describe('the settled cycle', () => {
  it('has the exact radius and period, from inside and from outside', () => {
    const system = compileModel(circle);
    for (const start of [0.1, 3]) {
      const settled = settledCycle(system, system.values, new Float64Array([start, 0]), 3);
      if (settled.outcome !== 'cycle') throw new Error(settled.outcome);
      expect(Math.abs(settled.period / Math.PI - 1)).toBeLessThan(1e-6);
      for (const { min, max } of settled.readouts) {
        expect(Math.abs(max - 1)).toBeLessThan(2e-3);
        expect(Math.abs(min + 1)).toBeLessThan(2e-3);
      }
    }
  });

  it('is found although the period to expect is wrong by a factor of five', () => {
    const system = compileModel(circle);
    for (const period of [0.6, 15]) {
      const settled = settledCycle(system, system.values, system.start, period);
      expect(settled.outcome).toBe('cycle');
      if (settled.outcome === 'cycle')
        expect(Math.abs(settled.period / Math.PI - 1)).toBeLessThan(1e-4);
    }
  });

  it('says steady where the course comes to rest, failed where it cannot tell or runs away', () => {
    const system = compileModel(circle);
    const at = (mu: number) => new Float64Array([mu, 2]);
    expect(settledCycle(system, at(-0.5), system.start, 3).outcome).toBe('steady');
    expect(settledCycle(system, at(1), new Float64Array(2), 3).outcome).toBe('steady');
    expect(settledCycle(system, at(-1e-6), system.start, 3).outcome).toBe('failed');
    expect(settledCycle(system, at(1), system.start, Number.NaN).outcome).toBe('failed');
    const away = compileModel(model({ x: 'x^3' }, [1], {}));
    expect(settledCycle(away, away.values, away.start, 10).outcome).toBe('failed');
  });

  it('of the van der Pol oscillator at mu = 1 has the published period and amplitude', () => {
    // Period 6.6632868593231301896996820305 and amplitude 2.00861986087484313650940188:
    // Andersen & Geer 1982, SIAM J Appl Math 42:678 (from memory), as quoted widely.
    const system = compileModel(model({ x: 'y', y: 'mu*(1 - x^2)*y - x' }, [1, 0], { mu: 1 }));
    const settled = settledCycle(system, system.values, system.start, 6);
    if (settled.outcome !== 'cycle') throw new Error(settled.outcome);
    expect(Math.abs(settled.period - 6.66328685932313)).toBeLessThan(1e-4);
    expect(Math.abs(settled.readouts[0]!.max - 2.008619860874843)).toBeLessThan(1e-4);
  });

  it('of a delayed feedback close to its onset has the onset period 4τ (exact at the onset)', () => {
    const system = compileModel(
      model({ x: '-k*tanh(x(t - tau))' }, [0.5], { k: Math.PI / 2 + 0.02, tau: 1 }),
    );
    const settled = settledCycle(system, system.values, system.start, 4);
    if (settled.outcome !== 'cycle') throw new Error(settled.outcome);
    // An odd feedback with this symmetry keeps period 4τ at every amplitude (Kaplan & Yorke 1974).
    expect(Math.abs(settled.period - 4)).toBeLessThan(1e-4);
  });

  it('is the same in other units of time and state', () => {
    const scaled = (unit: number, rate: number) => {
      const system = compileModel(
        model(
          {
            x: 'q*(mu*x - w*y - x*(x^2 + y^2)/s^2)',
            y: 'q*(w*x + mu*y - y*(x^2 + y^2)/s^2)',
          },
          [0.1 * unit, 0],
          { mu: 1, w: 2, q: rate, s: unit },
        ),
      );
      const settled = settledCycle(system, system.values, system.start, 3 / rate);
      if (settled.outcome !== 'cycle') throw new Error(settled.outcome);
      return [settled.period * rate, settled.readouts[0]!.max / unit];
    };
    for (const [unit, rate] of [
      [1e-9, 1],
      [1e9, 1e-9],
      [1e-9, 1e9],
    ] as const) {
      const [period, radius] = scaled(unit, rate);
      expect(Math.abs(period! / Math.PI - 1)).toBeLessThan(1e-6);
      expect(Math.abs(radius! - 1)).toBeLessThan(2e-3);
    }
  });
});

describe('cycles along the branch', () => {
  it('follow the square root from an onset, more closely spaced near it', () => {
    const system = compileModel(circle);
    const { cycles, omitted } = cyclesAlongBranch(system, system.values, 0, {
      branch: restBranch(-1, 2, 0, 2),
      onsets: [{ value: 0, period: Math.PI, oscillates: 'above' }],
    });
    expect(cycles.length + omitted.length).toBe(24);
    expect(cycles.length).toBeGreaterThanOrEqual(22);
    for (const c of cycles) {
      expect(c.stable).toBe(true);
      expect(Math.abs(c.readouts.x!.max / Math.sqrt(c.control) - 1)).toBeLessThan(0.01);
      expect(Math.abs(c.period / Math.PI - 1)).toBeLessThan(1e-4);
    }
    const controls = cycles.map((c) => c.control);
    expect(controls).toEqual([...controls].sort((a, b) => a - b));
    expect(controls.filter((c) => c < 0.5).length).toBeGreaterThan(cycles.length / 3);
  });

  it('are put in between where the amplitude rises steeply, and lie on the exact curve', () => {
    // The radius is the square root of g(mu), which climbs from 1 to 6 within 0.1 around mu = 1.
    const g = '(mu + 5/(1 + exp(60*(1 - mu))))';
    const steep = model(
      { x: `${g}*x - w*y - x*(x^2 + y^2)`, y: `w*x + ${g}*y - y*(x^2 + y^2)` },
      [0.1, 0],
      { mu: 1, w: 2 },
    );
    const system = compileModel(steep);
    const { cycles } = cyclesAlongBranch(system, system.values, 0, {
      branch: restBranch(-1, 2, 0, 2),
      onsets: [{ value: 0, period: Math.PI, oscillates: 'above' }],
    });
    const radii = cycles.map((c) => c.readouts.x!.max);
    cycles.forEach(({ control }, i) => {
      const exact = Math.sqrt(control + 5 / (1 + Math.exp(60 * (1 - control))));
      expect(Math.abs(radii[i]! / exact - 1)).toBeLessThan(0.01);
    });
    const steps = radii.slice(1).map((r, i) => Math.abs(r - radii[i]!));
    expect(Math.max(...steps) / Math.max(...radii)).toBeLessThan(0.2);
  });

  it('are none without an onset, and what fails is reported with its control value', () => {
    const system = compileModel(circle);
    const branch = restBranch(-2, -1, 0, 2);
    expect(cyclesAlongBranch(system, system.values, 0, { branch, onsets: [] }).cycles).toEqual([]);
    const wrong = [{ value: -1.5, period: Math.PI, oscillates: 'above' as const }];
    const { cycles, omitted } = cyclesAlongBranch(system, system.values, 0, {
      branch,
      onsets: wrong,
    });
    expect(cycles).toEqual([]);
    expect(omitted).toHaveLength(24);
    expect(omitted[10]!.why).not.toBe('');
  });
});
