import { describe, expect, it } from 'vitest';
import { predictRequest } from '@/lib/contracts';
import { predict } from '@/lib/sim/predict';
import cases from '../reference/check-values.json';

/**
 * Fifty reference systems, each with its source (field `source`) and worked out by routes that share no
 * code with this project. `unknown` criticality: the Lyapunov coefficient is exactly zero.
 */
describe('reference systems', () => {
  cases.forEach((c, i) => {
    it(`${i + 1}. ${c.title}: onsets, periods, sides, criticality, coexistence`, () => {
      const request = predictRequest.parse({ ...c.request, cycles: false });
      const { onsets, branch } = predict(request);
      expect(onsets.map((o) => o.value)).toHaveLength(c.expect.onsets.length);
      c.expect.onsets.forEach((want, k) => {
        const got = onsets[k]!;
        const slack = Math.max(want.rel_tol * Math.abs(want.value), want.abs_tol);
        expect(Math.abs(got.value - want.value)).toBeLessThanOrEqual(slack);
        expect(Math.abs(got.period / want.period - 1)).toBeLessThan(1e-3);
        expect(got.oscillates).toBe(want.direction === 'increasing' ? 'above' : 'below');
        expect(got.criticality).toBe(
          want.criticality === 'unknown' ? 'degenerate' : want.criticality,
        );
        const window = want.bistable_window;
        if (window) {
          const [from, to] = window as [number, number];
          const near = (end: number) => 0.02 * (to - from) + 0.003 * Math.abs(end);
          expect(got.coexistence).not.toBeNull();
          expect(Math.abs(got.coexistence!.from - from)).toBeLessThan(near(from));
          expect(Math.abs(got.coexistence!.to - to)).toBeLessThan(near(to));
        } else if (got.criticality !== 'subcritical') expect(got.coexistence).toBeNull();
        expect(Math.sign(got.growthSlope)).toBe(got.oscillates === 'above' ? 1 : -1);
      });
      expect(branch.control[0]).toBe(request.control.from);
      for (const v of branch.growthRate) expect(Number.isFinite(v)).toBe(true);
    });
  });

  it('covers all fifty', () => {
    expect(cases).toHaveLength(50);
  });
});
