import { describe, expect, it } from 'vitest';
import { predictRequest } from '@/lib/contracts';
import { compileModel } from '@/lib/sim/equations/compile';
import { predict } from '@/lib/sim/predict';
import { sampler } from '@/lib/sim/uncertainty/sample';
import cases from '../reference/check-values.json';

type Values = Readonly<Record<string, number>>;

/** Systems whose onset is a formula of their parameters: number of the reference system, spread, formula. */
const forms: { number: number; cv: number; source: string; onsets(p: Values): number[] }[] = [
  {
    number: 19,
    cv: 0.1,
    source: 'Griffith 1968: loop slope 8 at equal rates, none for n ≤ 8',
    onsets({ n, b }) {
      if (!(n! > 8)) return [];
      const z = (8 / (n! - 8)) ** (1 / n!);
      return [b! ** 3 * z * (1 + z ** n!)];
    },
  },
  {
    number: 4,
    cv: 0.15,
    source: 'x′ = B x(t − τ) − g x: cos ωτ = g/B, ω² = B² − g² (Mackey & Glass 1977)',
    onsets({ beta, g, n }) {
      const power = beta! / g! - 1;
      if (!(power > 0)) return [];
      const slope = (beta! * (1 + (1 - n!) * power)) / (1 + power) ** 2;
      if (!(slope < -g!)) return [];
      return [Math.acos(g! / slope) / Math.sqrt(slope ** 2 - g! ** 2)];
    },
  },
  {
    number: 28,
    cv: 0.4,
    source: "Sel'kov 1968 in the form of Strogatz 2015, §7.3: two onsets, none for 8a > 1",
    onsets({ a }) {
      const root = 1 - 8 * a!;
      if (!(root > 0)) return [];
      return [-1, 1].map((s) => Math.sqrt((1 - 2 * a! + s * Math.sqrt(root)) / 2));
    },
  },
  {
    number: 40,
    cv: 0.1,
    source: 'Lorenz 1963: r = s(s + b + 3)/(s − b − 1)',
    onsets: ({ s, b }) => (s! > b! + 1 ? [(s! * (s! + b! + 3)) / (s! - b! - 1)] : []),
  },
];

describe('every draw against a closed form, and the share without onset exactly', () => {
  for (const { number, cv, source, onsets } of forms) {
    const reference = cases[number - 1]!;
    it(`${reference.title} (${source})`, () => {
      const request = predictRequest.parse({
        ...reference.request,
        draws: 500,
        seed: 11,
        cycles: false,
      });
      for (const p of request.model.parameters) p.spread = { kind: 'lognormal', cv };
      const answer = predict(request);
      const system = compileModel(request.model);
      const wanted: number[][] = answer.onsets.map(() => []);
      for (const draw of sampler(request.model, request.control, system).draws(500, 11)) {
        const values = Object.fromEntries(
          system.parameters.map((s, j) => [s, draw.parameters[j]!] as const),
        );
        onsets(values).forEach((v, k) => {
          if (v >= request.control.from && v <= request.control.to) wanted[k]!.push(v);
        });
      }
      answer.onsets.forEach(({ spread }, k) => {
        expect(spread!.none).toBe((500 - wanted[k]!.length) / 500);
        spread!.values.forEach((v, i) => {
          expect(Math.abs(v / wanted[k]![i]! - 1)).toBeLessThan(1e-12);
        });
      });
    });
  }
});
