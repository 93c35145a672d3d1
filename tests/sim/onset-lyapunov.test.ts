import { describe, expect, it } from 'vitest';
import { ask } from './predict-case';

describe('first Lyapunov coefficient, with its size', () => {
  it('rotating normal form w′ = (c + iω)w + a w|w|²: l1 = 2a/ω for ⟨q,q⟩ = ⟨p,q⟩ = 1', () => {
    for (const [a, omega] of [
      [-1, 3],
      [0.25, 0.5],
      [-40, 200],
    ] as const) {
      const { onsets } = ask(
        {
          x: 'c*x - w*y + a*x*(x^2 + y^2)',
          y: 'w*x + c*y + a*y*(x^2 + y^2)',
        },
        { x: 0, y: 0 },
        { c: 0, w: omega, a },
        { symbol: 'c', from: -1, to: 1 },
      );
      expect(onsets[0]!.lyapunov / ((2 * a) / omega)).toBeCloseTo(1, 11);
      expect(onsets[0]!.criticality).toBe(a < 0 ? 'supercritical' : 'subcritical');
    }
  });

  it('quadratic terms count: x″ + x = c x′ + k x x′ + m x² (Guckenheimer & Holmes 1983, (3.4.11))', () => {
    // With Y = −x′: X′ = −Y, Y′ = X + k X Y − m X², so a = −g_xy (g_xx + g_yy)/16 = k m/8 and, as above,
    // l1 = 2a/ω.
    for (const [k, m] of [
      [1, 1],
      [1, -1],
      [-2, 0.5],
    ] as const) {
      const { onsets } = ask(
        { x: 'y', y: '-x + c*y + k*x*y + m*x^2' },
        { x: 0, y: 0 },
        { c: 0, k, m },
        { symbol: 'c', from: -0.5, to: 0.5 },
      );
      expect(Math.sign(onsets[0]!.lyapunov)).toBe(Math.sign(k * m));
      expect(onsets[0]!.lyapunov).toBeCloseTo((k * m) / 4, 10);
    }
  });

  it("delayed logistic growth: amplitude² = 40 (r − π/2)/(3π − 2) near r·τ = π/2 fixes l1's size", () => {
    // x′ = −r x(t − 1)(1 + x); a² = 4 Re λ′ Δr / (−Re c1), Re λ′ = (π/2)/(1 + π²/4), so
    // l1 = Re c1/ω = −(3π − 2)/(10 (1 + π²/4)). Amplitude: Hassard, Kazarinoff & Wan 1981 (from memory).
    const { onsets } = ask(
      { x: '-r*x(t - tau)*(1 + x)' },
      { x: 0 },
      { r: 1, tau: 1 },
      { symbol: 'r', from: 0.5, to: 3 },
    );
    const wanted = -(3 * Math.PI - 2) / (10 * (1 + Math.PI ** 2 / 4));
    expect(onsets[0]!.lyapunov / wanted).toBeCloseTo(1, 11);
  });
});
