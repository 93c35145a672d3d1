import { describe, expect, it } from 'vitest';
import { designRequest, type Note } from '@/lib/contracts';
import { design } from '@/lib/planner/design/design';

const answer = (request: object) =>
  design(
    designRequest.parse({
      onset: { mean: 10, sd: 1 },
      range: [0, 20],
      order: 'ascending',
      levels: 3,
      replicates: 2,
      ...request,
    }),
  );
type Answer = ReturnType<typeof answer>;
const doses = (found: Answer) => found.levels.map((level) => level.dose);
const of = (found: Answer, purpose: string) =>
  found.levels.filter((level) => level.purpose === purpose).map((level) => level.dose);
const codes = (found: Answer): string[] => found.notes.map((n) => n.code);

describe('orders and anchors', () => {
  it('puts the baseline on the steady side and the far side beyond, first at the ends', () => {
    const above = answer({ anchors: { below: 2, above: 1 } });
    expect(above.levels[0]).toMatchObject({ dose: 0, purpose: 'baseline', position: 1 });
    expect(of(above, 'baseline')[1]).toBeCloseTo((10 - 0.9816) / 2, 3);
    expect(of(above, 'far side')).toEqual([20]);
    const below = answer({ oscillates: 'below', anchors: { below: 2, above: 1 } });
    expect(of(below, 'far side')).toEqual([0]);
    expect(of(below, 'baseline')[1]).toBe(20);
    expect(of(below, 'baseline')[0]).toBeCloseTo(20 - (10 - 0.9816) / 2, 3);
  });

  it('leaves anchors out on request', () => {
    expect(answer({ anchors: { below: 0, above: 0 } }).levels).toHaveLength(3);
  });

  it('works up, down, both ways with the top once, or in an order that the seed sets', () => {
    const up = doses(answer({}));
    expect(up).toEqual([...up].sort((a, b) => a - b));
    expect(doses(answer({ order: 'descending' }))).toEqual([...up].reverse());
    expect(doses(answer({ order: 'both' }))).toEqual([...up, ...up.slice(0, -1).reverse()]);
    const orders = [1, 2, 3, 4, 5, 6].map((seed) => doses(answer({ order: 'randomised', seed })));
    for (const order of orders) expect([...order].sort((a, b) => a - b)).toEqual(up);
    expect(new Set(orders.map(String)).size).toBeGreaterThan(2);
    expect(doses(answer({ order: 'randomised', seed: 3 }))).toEqual(orders[2]);
  });

  it('refuses a largest step in random order', () => {
    const request = { order: 'randomised', limits: { largestStep: 1 } };
    expect(() => answer(request)).toThrow(/random order/);
    const parsed = designRequest.parse({
      onset: { mean: 1, sd: 1 },
      range: [0, 2],
      order: 'ascending',
      levels: 1,
      replicates: 1,
      limits: { largestStep: 1 },
    });
    expect(() => design({ ...parsed, order: 'randomised' })).toThrow(/random order/);
  });
});

describe('largest step', () => {
  it('asks for rungs on the way up only', () => {
    const up = answer({ limits: { largestStep: 3 } });
    expect(of(up, 'onset')).toHaveLength(3);
    expect(of(up, 'approach').length).toBeGreaterThan(3);
    expect(codes(up)).toContain('approach-added');
    const high = answer({ order: 'descending', limits: { largestStep: 3, start: 20 } });
    expect(of(high, 'approach')).toEqual([]);
  });

  it('climbs to the top first where a falling series starts low', () => {
    const down = answer({ order: 'descending', limits: { largestStep: 3 } });
    const rows = doses(down);
    const top = rows.indexOf(20);
    expect(down.levels.slice(0, top).every((level) => level.purpose === 'approach')).toBe(true);
    expect(of(down, 'approach')).toHaveLength(top);
    expect(rows[0]).toBeLessThanOrEqual(3);
  });

  it('counts from the dose in force, outside the range too', () => {
    const found = answer({ range: [8, 12], limits: { start: 0, largestStep: 2.5 } });
    expect(doses(found).slice(0, 4)).toEqual([2, 4, 6, 8]);
    expect(found.levels[3]!.purpose).toBe('baseline');
  });

  it('retraces all rows when the series goes both ways', () => {
    const rows = doses(answer({ order: 'both', limits: { largestStep: 3 } }));
    expect(rows).toEqual([...rows].reverse());
    expect(rows.filter((dose) => dose === 20)).toHaveLength(1);
  });

  it('stays on one side of a gap that no allowed rise crosses', () => {
    const grid = [0, 1, 2, 9, 9.5, 10, 10.5, 11, 20];
    const low = answer({ limits: { grid, largestStep: 1 } });
    expect(Math.max(...doses(low))).toBeLessThanOrEqual(2);
    expect(codes(low)).toContain('anchor-unreachable');
    const high = answer({ limits: { grid, largestStep: 1, start: 10 } });
    expect(Math.min(...doses(high))).toBe(9);
    expect(Math.max(...doses(high))).toBe(11);
    const down = answer({ order: 'descending', limits: { grid, largestStep: 1, start: 10 } });
    expect(of(down, 'baseline')).toEqual([0]);
  });

  it('chooses rungs among the settable doses, as few as can be', () => {
    const grid = Array.from({ length: 41 }, (_, i) => i / 2);
    const found = answer({ limits: { grid, largestStep: 4.5 } });
    for (const dose of doses(found)) expect(grid).toContain(dose);
    expect(of(found, 'approach')).toHaveLength(2);
  });

  it('says so when it would take thousands of rungs', () => {
    expect(() => answer({ limits: { largestStep: 1e-6 } })).toThrow(/rungs/);
  });
});

describe('what cannot be met is said', () => {
  const cases: [string, object, Note['code'], number][] = [
    ['a ceiling under the range', { limits: { ceiling: -1 } }, 'fewer-levels', 0],
    ['a ceiling under the onset', { limits: { ceiling: 8 } }, 'ceiling-below-onset', 3],
    ['fewer settable doses', { limits: { grid: [0, 9, 20], ceiling: 10 } }, 'fewer-levels', 2],
    ['nothing within reach', { limits: { grid: [5, 9], largestStep: 1 } }, 'fewer-levels', 0],
    ['a wide smallest step', { limits: { smallestStep: 15 } }, 'fewer-levels', 2],
    ['an end off the grid', { limits: { grid: [1, 9, 10, 11, 19] } }, 'anchor-unreachable', 3],
    ['a ceiling under the far side', { limits: { ceiling: 15 } }, 'anchor-unreachable', 3],
    ['an onset beyond the range', { onset: { mean: 40, sd: 1 } }, 'range-misses-onset', 3],
    ['a start above the ceiling', { limits: { start: 30, ceiling: 25 } }, 'limit-moved-level', 3],
  ];
  for (const [what, request, code, count] of cases) {
    it(`says it: ${what}`, () => {
      const found = answer(request);
      expect(codes(found)).toContain(code);
      expect(of(found, 'onset')).toHaveLength(count);
    });
  }

  it('says nothing when all is met', () => {
    expect(answer({}).notes).toEqual([]);
  });

  it('still places different levels when all draws agree', () => {
    for (const blur of [0, 0.5]) {
      const found = answer({ onset: { values: [5, 5, 5] }, levels: 5, blur });
      expect(new Set(of(found, 'onset')).size).toBe(5);
      expect(found.expected.sd).toBe(0);
    }
  });
});

describe('numbers beyond reason', () => {
  const cases: [string, object, string][] = [
    ['draws', { onset: { values: [1e300, -1e300] } }, 'onset'],
    ['a doubt', { doubt: 30 }, 'doubt'],
    ['a range', { range: [-1e308, 1e308] }, 'range'],
  ];
  for (const [what, request, at] of cases) {
    it(`are refused with the field to mend: ${what}`, () => {
      expect(() => answer(request)).toThrow(
        expect.objectContaining({ code: 'limit-exceeded', at }),
      );
    });
  }
});

describe('levels of one smallest step', () => {
  it('keeps it exactly where it binds: five around the mean of a narrow onset', () => {
    const found = of(answer({ levels: 5, limits: { smallestStep: 2 } }), 'onset');
    for (let i = 1; i < 5; i += 1)
      expect(found[i]! - found[i - 1]!).toBeGreaterThanOrEqual(2 - 1e-9);
    expect(found[2]).toBeCloseTo(10, 6);
  });
});
