import { describe, expect, it } from 'vitest';
import { designRequest } from '@/lib/contracts';
import { design } from '@/lib/planner/design/design';
import { normalCdf } from '@/lib/planner/design/normal';
import { randomSource } from '@/lib/sim/random/generator';

const answer = (request: object) =>
  design(
    designRequest.parse({
      onset: { mean: 10, sd: 1 },
      range: [0, 20],
      order: 'ascending',
      levels: 3,
      replicates: 1,
      ...request,
    }),
  );
const onsetDoses = (request: object) =>
  answer(request)
    .levels.filter((level) => level.purpose === 'onset')
    .map((level) => level.dose);

/** Variance left by certain verdicts, straight from its definition. */
function cellVariance(values: number[], levels: number[]): number {
  const cells = new Map<number, number[]>();
  for (const x of values) {
    const cell = levels.filter((d) => d < x).length;
    cells.set(cell, [...(cells.get(cell) ?? []), x]);
  }
  let sum = 0;
  for (const cell of cells.values()) {
    const mean = cell.reduce((s, x) => s + x, 0) / cell.length;
    sum += cell.reduce((s, x) => s + (x - mean) ** 2, 0);
  }
  return sum / values.length;
}

/** E[Var] over all 2^k verdicts of a normal onset on a fine, even grid. */
function allOutcomes(levels: number[], blur: number, mean: number, sd: number): number {
  const xs = Array.from({ length: 601 }, (_, i) => mean + sd * (-6 + 0.02 * i));
  const prior = xs.map((x) => Math.exp(-0.5 * ((x - mean) / sd) ** 2));
  const total = prior.reduce((s, w) => s + w, 0);
  const p = levels.map((d) => xs.map((x) => normalCdf((d - x) / blur)));
  let left = 0;
  for (let outcome = 0; outcome < 2 ** levels.length; outcome += 1) {
    const joint = prior.map((w, j) =>
      p.reduce((q, row, i) => q * ((outcome >> i) & 1 ? row[j]! : 1 - row[j]!), w / total),
    );
    const w = joint.reduce((s, x) => s + x, 0);
    if (w === 0) continue;
    const m = joint.reduce((s, q, j) => s + q * xs[j]!, 0) / w;
    left += joint.reduce((s, q, j) => s + q * (xs[j]! - m) ** 2, 0);
  }
  return left;
}

describe('certain verdicts', () => {
  it('has a normal distribution function that agrees with Abramowitz & Stegun, table 26.1', () => {
    expect(normalCdf(1)).toBeCloseTo(0.841344746068543, 14);
    expect(normalCdf(2)).toBeCloseTo(0.977249868051821, 14);
    expect(normalCdf(-5) / 2.866515719e-7).toBeCloseTo(1, 8);
    expect(normalCdf(3.999999) - normalCdf(4.000001)).toBeCloseTo(0, 8);
  });

  it('reproduces the quantisers of Max 1960 (table I: thresholds and mean square error)', () => {
    const published: [number, number[], number][] = [
      [1, [0], 0.3634],
      [3, [-0.9816, 0, 0.9816], 0.1175],
      [7, [-1.748, -1.05, -0.5006, 0, 0.5006, 1.05, 1.748], 0.03454],
    ];
    for (const [levels, thresholds, error] of published) {
      onsetDoses({ levels }).forEach((dose, i) => {
        expect(Math.abs(dose - 10 - thresholds[i]!)).toBeLessThan(2e-4);
      });
      expect(answer({ levels }).expected.sd ** 2).toBeCloseTo(error, 4);
    }
  });

  it('finds the exhaustive optimum of small sets of draws', () => {
    const random = randomSource(11);
    for (let round = 0; round < 30; round += 1) {
      const values = Array.from({ length: 9 }, () => 4 + 12 * random.uniform());
      const sorted = [...values].sort((a, b) => a - b);
      const middles = sorted.slice(1).map((x, i) => (x + sorted[i]!) / 2);
      let least = Infinity;
      for (const a of middles)
        for (const b of middles)
          for (const c of middles)
            if (a < b && b < c) least = Math.min(least, cellVariance(values, [a, b, c]));
      const found = answer({ onset: { values } });
      expect(found.expected.sd ** 2).toBeCloseTo(least, 10);
      expect(cellVariance(values, onsetDoses({ onset: { values } }))).toBeCloseTo(least, 10);
    }
  });

  it('finds the exhaustive optimum on a grid with a smallest step', () => {
    const random = randomSource(12);
    for (let round = 0; round < 30; round += 1) {
      const values = Array.from({ length: 15 }, () => 4 + 12 * random.uniform());
      const grid = Array.from({ length: 12 }, () => 20 * random.uniform()).sort((a, b) => a - b);
      let least = Infinity;
      for (const a of grid)
        for (const b of grid) if (b - a >= 2) least = Math.min(least, cellVariance(values, [a, b]));
      const limits = { grid, smallestStep: 2 };
      const found = answer({ onset: { values }, levels: 2, limits });
      expect(found.expected.sd ** 2).toBeCloseTo(least, 10);
    }
  });

  it('gains nothing from replicates', () => {
    expect(onsetDoses({ replicates: 5 })).toEqual(onsetDoses({ replicates: 1 }));
    expect(answer({ replicates: 5 }).expected).toEqual(answer({ replicates: 1 }).expected);
  });

  it('mirrors', () => {
    const values = [3, 4, 7, 7.5, 9, 12, 15];
    const turned = values.map((x) => 20 - x);
    const up = onsetDoses({ onset: { values } });
    const down = onsetDoses({ onset: { values: turned }, oscillates: 'below' });
    up.forEach((dose, i) => {
      expect(20 - dose).toBeCloseTo(down[up.length - 1 - i]!, 12);
    });
  });

  it('reports the interval and equal spacing as the contract defines them', () => {
    const values = Array.from({ length: 40 }, (_, i) => 2 + i * 0.4);
    const { expected } = answer({ onset: { values }, levels: 4 });
    const mean = values.reduce((s, x) => s + x, 0) / 40;
    expect(expected.low).toBeCloseTo(mean - 1.645 * expected.sd, 10);
    expect(expected.high).toBeCloseTo(mean + 1.645 * expected.sd, 10);
    expect(expected.equalSpacingSd ** 2).toBeCloseTo(cellVariance(values, [4, 8, 12, 16]), 10);
  });
});

describe('model doubt', () => {
  const nothing = { limits: { ceiling: -100 } };
  it('is a lognormal factor on positive onsets: variance (m² + s²) e^(2d²) − m² e^(d²)', () => {
    const d = 0.7;
    const { expected } = answer({ doubt: d, ...nothing });
    const mean = 10 * Math.exp((d * d) / 2);
    expect((expected.low + expected.high) / 2).toBeCloseTo(mean, 3);
    expect(expected.sd ** 2).toBeCloseTo(101 * Math.exp(2 * d * d) - mean * mean, 2);
    const draws = answer({ onset: { values: [8, 12] }, doubt: d, ...nothing });
    expect(draws.expected.sd ** 2).toBeCloseTo(104 * Math.exp(2 * d * d) - mean * mean, 2);
  });

  it('is a share of the range where the onset can be ≤ 0', () => {
    const normal = answer({ onset: { mean: 1, sd: 1 }, doubt: 0.1, ...nothing });
    expect(normal.expected.sd).toBeCloseTo(Math.sqrt(1 + 4), 10);
    const draws = answer({ onset: { values: [-1, 1] }, doubt: 0.1, ...nothing });
    expect(draws.expected.sd).toBeCloseTo(Math.sqrt(1 + 4), 6);
  });

  it('spreads the levels, and keeps the optimum of the widened normal', () => {
    const sd = Math.hypot(1, 2);
    const doses = onsetDoses({ onset: { mean: 1, sd: 1 }, range: [-10, 10], doubt: 0.1 });
    expect(doses[2]! - doses[1]!).toBeCloseTo(0.9816 * sd, 3);
  });
});

describe('blurred verdicts', () => {
  it('expects the variance that all outcomes give', () => {
    for (const blur of [0.3, 0.8, 2]) {
      const doses = onsetDoses({ blur, levels: 4 });
      const { sd } = answer({ blur, levels: 4 }).expected;
      expect(sd / Math.sqrt(allOutcomes(doses, blur, 10, 1))).toBeCloseTo(1, 3);
    }
  });

  it('comes within 1 % of a long random search', () => {
    for (const [blur, levels] of [
      [0.4, 3],
      [1, 2],
      [0.7, 4],
    ] as const) {
      const found = Math.sqrt(allOutcomes(onsetDoses({ blur, levels }), blur, 10, 1));
      const random = randomSource(levels);
      let best = Array.from({ length: levels }, (_, i) => 9 + (2 * i) / levels);
      let least = allOutcomes(best, blur, 10, 1);
      for (let trial = 0; trial < 300; trial += 1) {
        const width = trial < 100 ? 0.8 : trial < 200 ? 0.2 : 0.05;
        const next = best.map((d) => d + width * random.normal());
        const cost = allOutcomes(next, blur, 10, 1);
        if (cost < least) [best, least] = [next, cost];
      }
      expect(found).toBeLessThan(1.01 * Math.sqrt(least));
    }
  });

  it('counts replicates as repeated verdicts at the same dose', () => {
    const once = answer({ blur: 0.5, levels: 1 });
    const thrice = answer({ blur: 0.5, levels: 1, replicates: 3 });
    const dose = onsetDoses({ blur: 0.5, levels: 1, replicates: 3 })[0]!;
    const same = Math.sqrt(allOutcomes([dose, dose, dose], 0.5, 10, 1));
    expect(thrice.expected.sd / same).toBeCloseTo(1, 3);
    expect(thrice.expected.sd).toBeLessThan(once.expected.sd);
  });

  it('agrees with Fisher information where outcomes are too many to count', () => {
    const found = answer({ blur: 1, levels: 24, replicates: 8 });
    const doses = found.levels.filter((l) => l.purpose === 'onset').map((l) => l.dose);
    let [left, weight] = [0, 0];
    for (let x = 5; x <= 15; x += 0.05) {
      let information = 1;
      for (const d of doses) {
        const p = normalCdf(d - x);
        information +=
          (8 * (Math.exp(-((d - x) ** 2) / 2) / Math.sqrt(2 * Math.PI)) ** 2) /
          (p * normalCdf(x - d));
      }
      const w = Math.exp(-0.5 * (x - 10) ** 2);
      left += w / information;
      weight += w;
    }
    // The posterior variance tends to 1/information; at 192 verdicts it is within a few per cent.
    expect(found.expected.sd / Math.sqrt(left / weight)).toBeGreaterThan(0.96);
    expect(found.expected.sd / Math.sqrt(left / weight)).toBeLessThan(1.06);
  });

  it('tends to the certain optimum as the blur vanishes', () => {
    onsetDoses({ blur: 0.01 }).forEach((dose, i) => {
      expect(Math.abs(dose - onsetDoses({})[i]!)).toBeLessThan(0.05);
    });
  });
});
