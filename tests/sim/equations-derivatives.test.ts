import { describe, expect, it } from 'vitest';
import type { SystemModel } from '@/lib/contracts/model';
import { compileModel } from '@/lib/sim/equations/compile';
import { type RandomSource, randomSource } from '@/lib/sim/random/generator';

function model(
  equations: Record<string, string>,
  parameters: Record<string, number> = {},
): SystemModel {
  return {
    name: 'test',
    timeUnit: 's',
    variables: Object.keys(equations).map((symbol) => ({ symbol, start: 1 })),
    parameters: Object.entries(parameters).map(([symbol, value]) => ({ symbol, value })),
    equations,
  };
}

/** A random expression that is smooth where x, y lie in (0.5, 2). */
function randomExpression(random: RandomSource, depth: number): string {
  if (depth === 0) {
    return ['x', 'y', 'a', 'b', 'x(t - tau)', 'y(t - tau)', '1.5', '0.7'][random.below(8)]!;
  }
  const one = () => randomExpression(random, depth - 1);
  const positive = () => `(1.2 + (${one()})^2)`;
  const forms = [
    () => `(${one()} + ${one()})`,
    () => `(${one()} - ${one()})`,
    () => `${one()}*${one()}`,
    () => `${one()}/${positive()}`,
    () => `${positive()}^(${one()}/4)`,
    () => `x^n*${one()}`,
    () => `${one()}/(1 + x(t - tau)^n)`,
    () => `-${one()}`,
    () => `exp(-${positive()})`,
    () => `log(${positive()})`,
    () => `log10(${positive()})`,
    () => `sqrt(${positive()})`,
    () => `sin(${one()})`,
    () => `cos(${one()})`,
    () => `tanh(${one()})`,
    () => `tan(sin(${one()})/2)`,
    () => `sinh(sin(${one()}))`,
    () => `cosh(cos(${one()}))`,
    () => `abs(${positive()})`,
    () => `max(${positive()}, -1)`,
    () => `min(${one()}, 50 + ${positive()})`,
  ];
  return forms[random.below(forms.length)]!();
}

describe('symbolic derivatives', () => {
  const close = (got: number, want: number, scale: number) =>
    expect(Math.abs(got - want)).toBeLessThan(2e-6 * Math.max(1, Math.abs(want), scale));

  it('agree with central differences to third order on seeded random expressions', () => {
    for (let seed = 1; seed <= 150; seed += 1) {
      const random = randomSource(seed);
      const system = compileModel(
        model(
          { x: randomExpression(random, 3), y: randomExpression(random, 2) },
          { a: 1.3, b: 0.8, n: 2.6, tau: 1 },
        ),
      );
      const n = 2;
      const width = n * (system.K + 1);
      const z = Float64Array.from({ length: width }, () => 0.6 + 1.2 * random.uniform());
      const [u, v, w] = [0, 1, 2].map(() =>
        Float64Array.from({ length: width }, () => random.uniform() - 0.5),
      ) as [Float64Array, Float64Array, Float64Array];
      const p = system.values;
      const h = 1e-5;
      const shifted = (d: Float64Array, s: number) => z.map((value, i) => value + s * d[i]!);
      const difference = (f: (zz: Float64Array, out: Float64Array) => void, d: Float64Array) => {
        const plus = new Float64Array(n);
        const minus = new Float64Array(n);
        f(shifted(d, h), plus);
        f(shifted(d, -h), minus);
        return plus.map((value, i) => (value - minus[i]!) / (2 * h));
      };
      const jacobian = new Float64Array(n * width);
      system.jacobian(z, p, jacobian);
      const along = (d: Float64Array) =>
        Float64Array.from({ length: n }, (_, i) =>
          d.reduce((s, x, c) => s + x * jacobian[i * width + c]!, 0),
        );
      const first = difference((zz, out) => system.rhs(zz, p, out), u);
      const second = new Float64Array(n);
      const third = new Float64Array(n);
      system.second(z, p, u, v, second);
      system.third(z, p, u, v, w, third);
      const secondWant = difference((zz, out) => {
        const jac = new Float64Array(n * width);
        system.jacobian(zz, p, jac);
        out.set(
          Float64Array.from({ length: n }, (_, i) =>
            u.reduce((s, x, c) => s + x * jac[i * width + c]!, 0),
          ),
        );
      }, v);
      const thirdWant = difference((zz, out) => system.second(zz, p, u, v, out), w);
      for (let i = 0; i < n; i += 1) {
        close(along(u)[i]!, first[i]!, 0);
        close(second[i]!, secondWant[i]!, Math.abs(first[i]!));
        close(third[i]!, thirdWant[i]!, Math.abs(second[i]!));
      }
      checkParameters(system, z, h);
    }
  });

  function checkParameters(
    system: ReturnType<typeof compileModel>,
    z: Float64Array,
    h: number,
  ): void {
    const n = system.n;
    const size = n * n * (system.K + 1);
    for (let j = 0; j < system.m; j += 1) {
      const at = (s: number) => system.values.map((value, i) => value + (i === j ? s : 0));
      const [plus, minus, got] = [0, 1, 2].map(() => new Float64Array(n)) as [
        Float64Array,
        Float64Array,
        Float64Array,
      ];
      system.rhs(z, at(h), plus);
      system.rhs(z, at(-h), minus);
      system.parameterDerivative(z, system.values, j, got);
      const [jp, jm, jg] = [0, 1, 2].map(() => new Float64Array(size)) as [
        Float64Array,
        Float64Array,
        Float64Array,
      ];
      system.jacobian(z, at(h), jp);
      system.jacobian(z, at(-h), jm);
      system.jacobianParameter(z, system.values, j, jg);
      got.forEach((g, i) => {
        close(g, (plus[i]! - minus[i]!) / (2 * h), 0);
      });
      jg.forEach((g, i) => {
        close(g, (jp[i]! - jm[i]!) / (2 * h), Math.abs(jp[i]!));
      });
    }
  }

  it('are finite at zero for symbolic real exponents', () => {
    for (const n of [1, 2, 2.5, 3, 10]) {
      const system = compileModel(model({ x: 'x^n', y: 'x^n/(1 + x^n)' }, { n }));
      const z = new Float64Array([0, 1]);
      const one = new Float64Array([1, 0]);
      const jacobian = new Float64Array(4);
      const out = new Float64Array(2);
      system.jacobian(z, system.values, jacobian);
      expect(jacobian[0]).toBe(n === 1 ? 1 : 0);
      system.parameterDerivative(z, system.values, 0, out);
      expect([...out]).toEqual([0, 0]);
      if (n === 2.5) continue;
      system.second(z, system.values, one, one, out);
      expect(out[0]).toBe(n === 2 ? 2 : 0);
      system.third(z, system.values, one, one, one, out);
      expect(out[0]).toBe(n === 3 ? 6 : 0);
    }
  });

  it('take abs, min and max piece by piece', () => {
    const system = compileModel(model({ x: 'abs(x)*x + min(x, y) + 2*max(x, y)', y: 'y' }));
    const jacobian = new Float64Array(4);
    system.jacobian(new Float64Array([-2, 3]), system.values, jacobian);
    expect([...jacobian]).toEqual([4 + 1, 2, 0, 1]);
    system.jacobian(new Float64Array([5, 3]), system.values, jacobian);
    expect([...jacobian]).toEqual([10 + 2, 1, 0, 1]);
  });
});

describe('large models', () => {
  it('compiles a ring of 200 variables with all directional forms', () => {
    const n = 200;
    const equations: Record<string, string> = {};
    for (let i = 0; i < n; i += 1) {
      equations[`x${i}`] = `a/(1 + x${(i + n - 1) % n}^n) - x${i} + k*sin(x${(i + 7) % n} - x${i})`;
    }
    const system = compileModel(model(equations, { a: 3, n: 2.5, k: 0.1 }));
    const z = new Float64Array(n).fill(1.1);
    const out = new Float64Array(n);
    system.rhs(z, system.values, out);
    expect(out[5]).toBeCloseTo(3 / (1 + 1.1 ** 2.5) - 1.1, 12);
    const jacobian = new Float64Array(n * n);
    system.jacobian(z, system.values, jacobian);
    expect(jacobian[0]).toBeCloseTo(-1.1, 12);
    system.third(z, system.values, z, z, z, out);
    // Along u = z every sine's argument is 0 and does not move, so the Hill term alone has a third derivative.
    const hill = (s: number) => 3 / (1 + (1.1 * s) ** 2.5);
    const h = 2e-3;
    const want =
      (hill(1 + 2 * h) - 2 * hill(1 + h) + 2 * hill(1 - h) - hill(1 - 2 * h)) / (2 * h ** 3);
    expect(Math.abs(out[9]! - want)).toBeLessThan(1e-3);
  });
});
