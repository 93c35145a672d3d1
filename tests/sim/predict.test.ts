import { describe, expect, it } from 'vitest';
import { ask, codes } from './predict-case';

describe('onsets against closed forms', () => {
  it('Brusselator: B = 1 + A², period 2π/A, l1 negative (Hassard, Kazarinoff & Wan 1981)', () => {
    for (const a of [0.3, 1, 2.5]) {
      const { onsets } = ask(
        { x: 'A - (B + 1)*x + x^2*y', y: 'B*x - x^2*y' },
        { x: 1, y: 1 },
        { A: a, B: 1 },
        { symbol: 'B', from: 0.2, to: 12 },
      );
      expect(onsets).toHaveLength(1);
      expect(Math.abs(onsets[0]!.value / (1 + a * a) - 1)).toBeLessThan(1e-12);
      expect(Math.abs((onsets[0]!.period * a) / (2 * Math.PI) - 1)).toBeLessThan(1e-11);
      expect(onsets[0]!.criticality).toBe('supercritical');
      // Re λ = (B − 1 − A²)/2 near the onset, so its slope is exactly one half.
      expect(onsets[0]!.growthSlope).toBeCloseTo(0.5, 10);
    }
  });

  it("Sel'kov: both onsets solve b⁴ + (2a − 1)b² + a + a² = 0 (Strogatz 2015, §7.3)", () => {
    const a = 0.06;
    const { onsets } = ask(
      { x: '-x + a*y + x^2*y', y: 'b - a*y - x^2*y' },
      { x: 0.1, y: 1 },
      { a, b: 0.1 },
      { symbol: 'b', from: 0.05, to: 1.5 },
    );
    const root = Math.sqrt(1 - 8 * a);
    const wanted = [1, -1].map((s) => Math.sqrt((1 - 2 * a - s * root) / 2));
    expect(onsets.map((o) => o.oscillates)).toEqual(['above', 'below']);
    onsets.forEach((o, i) => {
      expect(Math.abs(o.value / wanted[i]! - 1)).toBeLessThan(1e-12);
      const omega = Math.sqrt(a + wanted[i]! ** 2);
      expect(Math.abs((o.period * omega) / (2 * Math.PI) - 1)).toBeLessThan(1e-11);
    });
  });

  it('pure delayed integrator: k·τ = π/2 with period 4τ, and a linear system is degenerate', () => {
    for (const tau of [0.01, 1, 300]) {
      const { onsets } = ask(
        { x: '-k*x(t - tau)' },
        { x: 0.2 },
        { k: 1, tau },
        { symbol: 'k', from: 0.1 / tau, to: 3 / tau },
      );
      expect(onsets).toHaveLength(1);
      expect(Math.abs((onsets[0]!.value * tau) / (Math.PI / 2) - 1)).toBeLessThan(1e-12);
      expect(Math.abs(onsets[0]!.period / (4 * tau) - 1)).toBeLessThan(1e-12);
      expect(onsets[0]!.criticality).toBe('degenerate');
    }
  });

  it('delayed logistic growth at r·τ = π/2: slope and l1 as in the literature', () => {
    // d Re λ/dτ = r²/(1 + π²/4) at the onset (differentiate λ + r e^(−λτ) = 0); direction and stability:
    // Hassard, Kazarinoff & Wan 1981, ch. 4.
    const { onsets } = ask(
      { x: 'r*x*(1 - x(t - tau))' },
      { x: 1 },
      { r: 1, tau: 1 },
      { symbol: 'tau', from: 0, to: 3 },
    );
    expect(onsets).toHaveLength(1);
    expect(onsets[0]!.growthSlope).toBeCloseTo(1 / (1 + Math.PI ** 2 / 4), 10);
    expect(onsets[0]!.criticality).toBe('supercritical');
  });

  it('lag with delayed feedback: ωT = −tan ωτ, G = √(1 + ω²T²) (Longtin & Milton 1989)', () => {
    const table = [
      [0.5, 3.8069, 3.421],
      [1, 2.2618, 3.097],
      [2, 1.5198, 2.745],
    ] as const;
    for (const [tau, gain, ratio] of table) {
      const { onsets } = ask(
        { x: '-x - G*tanh(x(t - tau))' },
        { x: 0.1 },
        { G: 1, tau },
        { symbol: 'G', from: 0, to: 6 },
      );
      expect(onsets).toHaveLength(1);
      expect(Math.abs(onsets[0]!.value - gain)).toBeLessThan(1e-4);
      expect(Math.abs(onsets[0]!.period / tau - ratio)).toBeLessThan(1e-3);
    }
  });

  it('chemostat of Fussmann et al. 2000: 0.15098/d with 5.905 d, 0.96954/d with 5.445 d', () => {
    const grow = 'bc*N/(Kc + N)*C';
    const eat = 'bb*C/(Kb + C)';
    const { onsets } = ask(
      {
        N: `de*(Ni - N) - ${grow}`,
        C: `${grow} - ${eat}*B/eps - de*C`,
        R: `${eat}*R - (de + m + lam)*R`,
        B: `${eat}*R - (de + m)*B`,
      },
      Object.fromEntries(
        Object.entries({ N: 1.6, C: 4.3, R: 0.4, B: 1.8 }).map(([k, start]) => [
          k,
          { start, nonnegative: true },
        ]),
      ),
      { Ni: 80, bc: 3.3, Kc: 4.3, bb: 2.25, Kb: 15, m: 0.055, lam: 0.4, eps: 0.25, de: 0.5 },
      { symbol: 'de', from: 0.05, to: 1.6 },
    );
    expect(onsets.map((o) => o.value.toFixed(5))).toEqual(['0.15098', '0.96954']);
    expect(onsets.map((o) => o.period.toFixed(3))).toEqual(['5.905', '5.445']);
    expect(onsets.map((o) => o.oscillates)).toEqual(['above', 'below']);
  });

  it('the answer does not depend on units: states and time rescaled by 10^±9', () => {
    for (const s of [1e-9, 1, 1e9]) {
      for (const k of [1e-9, 1, 1e9]) {
        const { onsets } = ask(
          { x: 'k*s*(A - (B + 1)*x/s + (x/s)^2*y/s)', y: 'k*s*(B*x/s - (x/s)^2*y/s)' },
          { x: s, y: s },
          { A: 1, B: 1, s, k },
          { symbol: 'B', from: 0.5, to: 4 },
        );
        expect(onsets).toHaveLength(1);
        expect(Math.abs(onsets[0]!.value / 2 - 1)).toBeLessThan(1e-11);
        expect(Math.abs((onsets[0]!.period * k) / (2 * Math.PI) - 1)).toBeLessThan(1e-10);
      }
    }
  });
});

const polar = {
  x: 'g*x - w*y - x*(x^2 + y^2)',
  y: 'w*x + g*y - y*(x^2 + y^2)',
};
/** A rotating normal form whose growth rate is any expression of the control c. */
const normalForm = (growth: string, from: number, to: number, more: Record<string, number> = {}) =>
  ask(
    {
      x: polar.x.replaceAll('g', `(${growth})`),
      y: polar.y.replaceAll('g', `(${growth})`),
    },
    { x: 0, y: 0 },
    { c: 0, w: 3, ...more },
    { symbol: 'c', from, to },
  );

describe('onsets that a coarse walk would lose', () => {
  it('a pair of onsets close together', () => {
    for (const d of [1e-2, 1e-3, 1e-4, 1e-5]) {
      const { onsets } = normalForm('d2 - (c - 0.4321)^2', 0, 1, { d2: d * d });
      expect(onsets.map((o) => o.oscillates)).toEqual(['above', 'below']);
      expect(Math.abs(onsets[0]!.value - (0.4321 - d))).toBeLessThan(1e-9);
      expect(Math.abs(onsets[1]!.value - (0.4321 + d))).toBeLessThan(1e-9);
    }
  });

  it('no onset where the growth rate only comes near zero', () => {
    expect(normalForm('-1e-6 - (c - 0.4321)^2', 0, 1).onsets).toEqual([]);
  });

  it('onsets at either end of the range, and a hair inside', () => {
    for (const at of [0, 1, 1e-9, 1 - 1e-9, 1e-6, 1 - 1e-6]) {
      const rising = normalForm('c - b', 0, 1, { b: at });
      expect(rising.onsets).toHaveLength(1);
      expect(Math.abs(rising.onsets[0]!.value - at)).toBeLessThan(1e-10);
      expect(rising.onsets[0]!.oscillates).toBe('above');
      const falling = normalForm('b - c', 0, 1, { b: at });
      expect(falling.onsets.map((o) => o.oscillates)).toEqual(['below']);
    }
  });

  it('onsets just outside the range are noted, not returned', () => {
    for (const at of [-0.01, 1.01, 1.0001, -1e-6]) {
      const answer = normalForm('c - b', 0, 1, { b: at });
      expect(answer.onsets).toEqual([]);
      expect(codes(answer)).toContain('onset-beyond-range');
      expect(codes(answer)).toContain('no-onset');
      expect(codes(answer).includes('unstable-from-start')).toBe(at < 0);
    }
  });
});

describe('what is not an onset', () => {
  it('a centre: the pair lies on the axis for every control', () => {
    const { onsets } = ask(
      { x: 'a*x - x*y', y: 'x*y - b*y' },
      { x: 1.1, y: 0.9 },
      { a: 1, b: 1 },
      { symbol: 'b', from: 0.5, to: 2 },
    );
    expect(onsets).toEqual([]);
  });

  it('a second pair crossing while one is unstable already', () => {
    const { onsets } = ask(
      { ...polarPair('x', 'y', 'c'), ...polarPair('u', 'v', 'c - 0.3') },
      { x: 0, y: 0, u: 0, v: 0 },
      { c: 0, w: 2 },
      { symbol: 'c', from: -0.5, to: 1 },
    );
    expect(onsets.map((o) => o.value)).toHaveLength(1);
    expect(Math.abs(onsets[0]!.value)).toBeLessThan(1e-12);
  });

  it('a fold is followed through and noted', () => {
    const answer = ask(
      { x: 'c + x - x^3' },
      { x: -1.2 },
      { c: 0 },
      { symbol: 'c', from: -0.6, to: 0.6 },
    );
    expect(codes(answer).filter((c) => c === 'fold')).toHaveLength(2);
    expect(answer.branch.control.at(-1)).toBe(0.6);
    const turn = answer.notes.find((n) => n.code === 'fold')!;
    expect(turn.text).toContain('0.3849');
  });
});

function polarPair(x: string, y: string, growth: string) {
  const r = `(${x}^2 + ${y}^2)`;
  return {
    [x]: `(${growth})*${x} - w*${y} - ${x}*${r}`,
    [y]: `w*${x} + (${growth})*${y} - ${y}*${r}`,
  };
}
