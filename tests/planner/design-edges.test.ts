import { describe, expect, it } from 'vitest';
import { designRequest } from '@/lib/contracts';
import { design } from '@/lib/planner/design/design';
import { designEdges, type SharedDesign } from '@/lib/planner/design/design-edges';

/** The window of a chemostat: it begins to oscillate near 3 and stops near 14. */
const shared: SharedDesign = { range: [0, 20], order: 'ascending', seed: 1 };
const edge = (mean: number, oscillates: 'above' | 'below', more: object = {}) =>
  designRequest.parse({
    onset: { mean, sd: 0.5 },
    oscillates,
    range: shared.range,
    order: shared.order,
    levels: 3,
    replicates: 1,
    ...more,
  });
const window = [edge(3, 'above'), edge(14, 'below', { levels: 2, replicates: 2 })];

describe('a window with two edges', () => {
  it('shares a baseline at either steady end and the far side between', () => {
    const { levels } = designEdges(window, shared);
    expect(levels.map((l) => l.purpose)).toEqual([
      'baseline',
      'onset',
      'onset',
      'onset',
      'far side',
      'onset',
      'onset',
      'baseline',
    ]);
    expect(levels.map((l) => l.edge)).toEqual([null, 0, 0, 0, null, 1, 1, null]);
    expect([levels[0]!.dose, levels.at(-1)!.dose]).toEqual([0, 20]);
    expect(levels.map((l) => l.position)).toEqual([1, 2, 3, 4, 5, 6, 7, 8]);
    expect(levels.every((l) => l.replicates === 2)).toBe(true);
  });

  it('chooses each edge as well as it would by itself', () => {
    const { levels, expected } = designEdges([window[1]!, window[0]!], shared);
    const alone = [window[1]!, window[0]!].map(design);
    expected.forEach((e, i) => {
      expect(e.sd).toBeCloseTo(alone[i]!.expected.sd, 9);
      const own = alone[i]!.levels.filter((l) => l.purpose === 'onset').map((l) => l.dose);
      levels
        .filter((l) => l.edge === i)
        .forEach((l, j) => {
          expect(l.dose).toBeCloseTo(own[j]!, 9);
        });
    });
  });

  it('keeps the largest rising step over the whole list, in every order', () => {
    for (const order of ['ascending', 'descending', 'both'] as const) {
      const { levels, notes } = designEdges(window, {
        ...shared,
        order,
        limits: { largestStep: 2 },
      });
      let at = 0;
      for (const { dose } of levels) {
        expect(dose - at).toBeLessThanOrEqual(2 * (1 + 1e-9));
        at = dose;
      }
      expect(levels.filter((l) => l.edge !== null).length).toBe(order === 'both' ? 10 : 5);
      expect(notes.map((n) => n.code)).toEqual(['approach-added']);
    }
    const mixed = designEdges(window, { ...shared, order: 'randomised', seed: 5 }).levels;
    expect([...mixed].map((l) => l.dose).sort((a, b) => a - b)).toEqual(
      designEdges(window, shared).levels.map((l) => l.dose),
    );
  });

  it('never mixes the levels of edges whose predictions overlap', () => {
    const close = [
      edge(9, 'above', { onset: { mean: 9, sd: 2 } }),
      edge(11, 'below', { onset: { mean: 11, sd: 2 } }),
    ];
    const { levels } = designEdges(close, { ...shared, limits: { smallestStep: 0.4 } });
    const edges = levels.filter((l) => l.edge !== null).map((l) => l.edge);
    expect(edges).toEqual([0, 0, 0, 1, 1, 1]);
    levels.slice(1).forEach((l, i) => {
      expect(l.dose - levels[i]!.dose).toBeGreaterThanOrEqual(0.4 * (1 - 1e-9));
    });
  });

  it('takes grid doses only and stays under the ceiling, saying what is lost', () => {
    const grid = Array.from({ length: 41 }, (_, i) => i / 2);
    const { levels, notes } = designEdges(window, { ...shared, limits: { grid, ceiling: 10 } });
    expect(levels.every((l) => grid.includes(l.dose) && l.dose <= 10)).toBe(true);
    expect(notes.map((n) => n.code)).toContain('ceiling-below-onset');
  });

  it('puts the baseline between two edges that oscillate outwards', () => {
    const outward = [edge(5, 'below'), edge(15, 'above')];
    const { levels } = designEdges(outward, { ...shared, limits: { largestStep: 30 } });
    expect(levels.filter((l) => l.purpose === 'baseline').map((l) => l.dose)[0]).toBeCloseTo(10, 6);
    expect(levels.filter((l) => l.purpose === 'far side').map((l) => l.dose)).toEqual([0, 20]);
  });

  it('answers one edge as design does, and none with nothing', () => {
    const one = designEdges([window[0]!], shared);
    expect(one.levels.map(({ edge: _, ...level }) => level)).toEqual(design(window[0]!).levels);
    expect(designEdges([], shared).levels).toEqual([]);
  });
});
