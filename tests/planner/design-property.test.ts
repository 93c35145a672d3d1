import { describe, expect, it } from 'vitest';
import { type DesignRequest, designAnswer, designRequest } from '@/lib/contracts';
import { design, equalSpacing } from '@/lib/planner/design/design';
import { startOf } from '@/lib/planner/design/settable';
import type { RandomSource } from '@/lib/sim/random/generator';
import { randomSource } from '@/lib/sim/random/generator';

const ORDERS = ['ascending', 'descending', 'both', 'randomised'] as const;

function someOnset(random: RandomSource, lo: number, span: number) {
  const place = () => lo + span * (-0.2 + 1.4 * random.uniform());
  if (random.uniform() < 0.5) return { mean: place(), sd: span * random.uniform() * 0.3 };
  const n = 1 + random.below(40);
  const coarse = random.uniform() < 0.3;
  const values = Array.from({ length: n }, place);
  return {
    values: coarse
      ? values.map((x) => lo + (span / 5) * Math.round((5 * (x - lo)) / span))
      : values,
  };
}

function someLimits(random: RandomSource, lo: number, span: number, ordered: boolean) {
  const maybe = (share: number) => random.uniform() < share;
  return {
    ...(maybe(0.3) ? { start: lo + span * (-0.5 + 2 * random.uniform()) } : {}),
    ...(maybe(0.4) ? { ceiling: lo + span * (-0.1 + 1.2 * random.uniform()) } : {}),
    ...(maybe(0.3) ? { smallestStep: (span / 8) * random.uniform() } : {}),
    ...(ordered && maybe(0.5) ? { largestStep: span * (0.02 + 0.5 * random.uniform()) } : {}),
    ...(maybe(0.4)
      ? {
          grid: Array.from(
            { length: 1 + random.below(40) },
            () => lo + span * (-0.2 + 1.4 * random.uniform()),
          ),
        }
      : {}),
  };
}

function someRequest(seed: number): DesignRequest {
  const random = randomSource(seed);
  const scale = 10 ** (random.below(19) - 9);
  const lo = scale * (random.uniform() < 0.5 ? 0 : random.normal());
  const span = scale * (0.1 + random.uniform());
  const order = ORDERS[random.below(4)]!;
  return designRequest.parse({
    onset: someOnset(random, lo, span),
    oscillates: random.uniform() < 0.5 ? 'above' : 'below',
    range: [lo, lo + span],
    order,
    levels: 1 + random.below(8),
    replicates: 1 + random.below(3),
    blur: random.uniform() < 0.12 ? span * 0.1 * random.uniform() : 0,
    doubt: random.uniform() < 0.2 ? random.uniform() : 0,
    limits: someLimits(random, lo, span, order !== 'randomised'),
    anchors: { below: random.below(3), above: random.below(3) },
    seed,
  });
}

function checkRows(request: DesignRequest, rows: number[]): void {
  const { ceiling, grid, largestStep } = request.limits ?? {};
  let at = startOf(request);
  for (const dose of rows) {
    if (ceiling !== undefined) expect(dose).toBeLessThanOrEqual(ceiling);
    if (grid) expect(grid).toContain(dose);
    if (largestStep !== undefined) expect(dose - at).toBeLessThanOrEqual(largestStep * (1 + 1e-9));
    at = dose;
  }
}

function checkOrder(request: DesignRequest, rows: number[], rungsFirst: number): void {
  const rising = (list: number[]) => list.every((d, i) => i === 0 || d > list[i - 1]!);
  if (request.order === 'ascending') expect(rising(rows)).toBe(true);
  if (request.order === 'descending') expect(rising(rows.slice(rungsFirst).reverse())).toBe(true);
  if (request.order === 'both' && rows.length > 0) {
    const top = rows.indexOf(Math.max(...rows));
    expect(rising(rows.slice(0, top + 1))).toBe(true);
    expect(rows.slice(top)).toEqual(rows.slice(0, top + 1).reverse());
  }
  if (request.order === 'randomised') expect(new Set(rows).size).toBe(rows.length);
}

function feasible(request: DesignRequest, equal: number[]): boolean {
  const { ceiling = Infinity, smallestStep = 0, grid } = request.limits ?? {};
  const step = equal.length > 1 ? equal[1]! - equal[0]! : Infinity;
  return !grid && Math.max(...equal) <= ceiling && smallestStep <= step;
}

describe('any request', () => {
  for (let block = 0; block < 8; block += 1) {
    it(`keeps limits, order and optimum: seeds ${block * 50} to ${block * 50 + 49}`, () => {
      for (let seed = block * 50; seed < block * 50 + 50; seed += 1) {
        const request = someRequest(seed);
        const found = designAnswer.parse(design(request));
        const rows = found.levels.map((level) => level.dose);
        const [lo, hi] = request.range;
        const onset = found.levels.filter((level) => level.purpose === 'onset');
        expect(found.levels.map((level) => level.position)).toEqual(rows.map((_, i) => i + 1));
        expect(found.levels.every((level) => level.replicates === request.replicates)).toBe(true);
        expect(onset.every((level) => level.dose >= lo && level.dose <= hi)).toBe(true);
        checkRows(request, rows);
        checkOrder(
          request,
          rows,
          found.levels.findIndex((l) => l.purpose !== 'approach'),
        );
        const distinct = [...new Set(onset.map((level) => level.dose))].sort((a, b) => a - b);
        const missing = found.notes.some((n) => n.code === 'fewer-levels');
        expect(distinct.length === request.levels || missing).toBe(true);
        const least = request.limits?.smallestStep ?? 0;
        const planned = found.levels.filter((level) => level.purpose !== 'approach');
        const places = [...new Set(planned.map((level) => level.dose))].sort((a, b) => a - b);
        for (let i = 1; i < places.length; i += 1) {
          expect(places[i]! - places[i - 1]!).toBeGreaterThanOrEqual(least * (1 - 1e-8));
        }
        const { sd, equalSpacingSd } = found.expected;
        if (feasible(request, equalSpacing(request.range, request.levels))) {
          expect(sd).toBeLessThanOrEqual(equalSpacingSd * (1 + 1e-6) + 1e-9 * (hi - lo));
        }
        if (seed % 10 === 0) expect(design(request)).toEqual(found);
      }
    });
  }
});
