import { complexLuFactor, complexLuSolve } from '../linalg/complex-lu';
import { characteristicMatrix, stackMode } from '../steady/characteristic';
import type { BranchContext } from '../steady/node';
import type { Problem } from '../steady/problem';
import type { Crossing } from './locate';

export interface Criticality {
  readonly criticality: 'supercritical' | 'subcritical' | 'degenerate';
  /** First Lyapunov coefficient l1 = Re c1 / ω. */
  readonly lyapunov: number;
}

interface Vector {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

/**
 * First Lyapunov coefficient of an onset.
 *
 * With Δ(iω)q = 0, pᴴΔ(iω) = 0, ⟨q,q⟩ = 1, pᴴΔ′(iω)q = 1 (Δ′ = I for ordinary systems) and Φ the stacked
 * history of q e^(iωθ):
 *   c1 = ½ pᴴ [ C(Φ,Φ,Φ̄) + B(Φ̄, H₂₀) + 2 B(Φ, H₁₁) ],
 *   H₂₀ = Δ(2iω)⁻¹B(Φ,Φ) e^(2iωθ),  H₁₁ = Δ(0)⁻¹B(Φ,Φ̄)
 * (Kuznetsov 2004, §5.4; with delays Diekmann et al. 1995, ch. X). The problem must be linearised at the
 * onset and the workspace must hold its null vectors, as `inspectCrossing` leaves them.
 * Degenerate: |Re c1| below 1e-9 of the sum of its terms' moduli.
 */
export function criticalityAt(context: BranchContext, at: Crossing): Criticality | null {
  const { problem, work } = context;
  const { system, n, K, z, p } = problem;
  const width = n * (K + 1);
  const omega = at.omega;
  let norm = 0;
  for (let i = 0; i < n; i++) norm += work.vr[i]! ** 2 + work.vi[i]! ** 2;
  norm = Math.sqrt(norm);
  if (!(norm > 0)) return null;
  const q = {
    re: work.vr.map((v) => v / norm),
    im: work.vi.map((v) => v / norm),
  };
  const phi = vector(width);
  stackMode(problem, q.re, q.im, 0, omega, phi.re, phi.im);
  const bar: Vector = { re: phi.re, im: phi.im.map((v) => -v) };
  const second = (u: Vector, v: Vector) => bilinear(problem, u, v);

  const h20 = solveAt(problem, 2 * omega, second(phi, phi));
  const h11 = solveAt(problem, 0, second(phi, bar));
  if (!h20 || !h11) return null;
  const h20Stack = vector(width);
  stackMode(problem, h20.re, h20.im, 0, 2 * omega, h20Stack.re, h20Stack.im);
  const h11Stack = vector(width);
  stackMode(problem, h11.re, h11.im, 0, 0, h11Stack.re, h11Stack.im);

  // C(Φ,Φ,Φ̄) for Φ = a + ib: real part C(a,a,a) + C(a,b,b), imaginary part C(a,a,b) + C(b,b,b).
  const third = (u: Float64Array, v: Float64Array, w: Float64Array) => {
    const out = new Float64Array(n);
    system.third(z, p, u, v, w, out);
    return out;
  };
  const { re: a, im: b } = phi;
  const cubic: Vector = {
    re: sum(third(a, a, a), third(a, b, b)),
    im: sum(third(a, a, b), third(b, b, b)),
  };
  const terms = [
    work.project(cubic.re, cubic.im),
    scaleBy(projectVector(context, second(bar, h20Stack)), 1),
    scaleBy(projectVector(context, second(phi, h11Stack)), 2),
  ];
  // The workspace's u is not normalised: uᴴΔ′q = d, so that p = u / d̄ and pᴴy = uᴴy / d.
  const [dr0, di0] = work.slope(0, omega);
  const dr = dr0 / norm;
  const di = di0 / norm;
  const d2 = dr * dr + di * di;
  if (!(d2 > 0)) return null;
  let real = 0;
  let moduli = 0;
  for (const [tr, ti] of terms) {
    real += (tr * dr + ti * di) / d2 / 2;
    moduli += Math.hypot(tr, ti) / Math.sqrt(d2) / 2;
  }
  if (!Number.isFinite(real)) return null;
  const lyapunov = real / omega;
  if (Math.abs(real) <= 1e-9 * moduli) return { criticality: 'degenerate', lyapunov };
  return { criticality: real < 0 ? 'supercritical' : 'subcritical', lyapunov };
}

function vector(length: number): Vector {
  return { re: new Float64Array(length), im: new Float64Array(length) };
}

function sum(a: Float64Array, b: Float64Array): Float64Array {
  return a.map((v, i) => v + b[i]!);
}

function scaleBy([re, im]: [number, number], k: number): [number, number] {
  return [k * re, k * im];
}

function projectVector(context: BranchContext, v: Vector): [number, number] {
  return context.work.project(v.re, v.im);
}

/** B(u, v) = f″ u v for complex u and v. */
function bilinear(problem: Problem, u: Vector, v: Vector): Vector {
  const { system, n, z, p } = problem;
  const part = (a: Float64Array, b: Float64Array) => {
    const out = new Float64Array(n);
    system.second(z, p, a, b, out);
    return out;
  };
  const rr = part(u.re, v.re);
  const ii = part(u.im, v.im);
  const ri = part(u.re, v.im);
  const ir = part(u.im, v.re);
  return { re: rr.map((x, i) => x - ii[i]!), im: ri.map((x, i) => x + ir[i]!) };
}

/** Δ(i·omega)⁻¹ y. */
function solveAt(problem: Problem, omega: number, y: Vector): Vector | null {
  const n = problem.n;
  const a = new Float64Array(n * n);
  const b = new Float64Array(n * n);
  characteristicMatrix(problem, 0, omega, a, b, n);
  const lu = complexLuFactor(a, b, n);
  if (lu.outcome === 'singular') return null;
  const out = { re: Float64Array.from(y.re), im: Float64Array.from(y.im) };
  complexLuSolve(lu, out.re, out.im);
  return out;
}
