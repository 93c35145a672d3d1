import { eigenvalues } from '../linalg/eigenvalues';
import { type Characteristic, polishRoot } from './characteristic';
import type { Problem } from './problem';
import type { Root } from './spectrum';

/**
 * Rightmost characteristic roots of x' = A x + Σ B_k x(t − τ_k).
 *
 * The infinitesimal generator is collocated on Chebyshev points of [−τ_max, 0] (Breda, Maset &
 * Vermiglio 2005): its eigenvalues *find* the roots; Newton on the characteristic equation *polishes*
 * each one. A bound on the size of the unstable roots sets the first order, half a point a radian and eight
 * more; the order is then raised until each leading root has a polished root of its own close by. Outcome 'uncertain' when the cap is reached before that.
 */
export function delayRoots(
  problem: Problem,
  work: Characteristic,
  scale: Float64Array,
): { outcome: 'ok' | 'uncertain'; roots: Root[]; norm: number } {
  const { bound, norm } = rootBound(problem);
  const longest = Math.max(...problem.tau);
  const reach = bound * longest;
  const cap = Math.max(16, Math.min(160, Math.floor(480 / problem.n)));
  let order = Math.min(cap, Math.ceil(0.5 * reach) + 8);
  for (;;) {
    const found = collocated(problem, order, longest);
    if (found) {
      const polished = certify(found, work, scale, norm);
      if (polished.certain || order >= cap) {
        return { outcome: polished.certain ? 'ok' : 'uncertain', roots: polished.roots, norm };
      }
    } else if (order >= cap) return { outcome: 'uncertain', roots: [], norm };
    order = Math.min(cap, Math.ceil(order * 1.5));
  }
}

/**
 * A bound on the size of every root with nonnegative real part, and the size of the linearisation.
 *
 * For Re λ ≥ 0 and a_ii < 0, |λ| ≤ |λ − a_ii|; Gershgorin's discs in Perron's scaling then give
 * |λ| ≤ ρ(M), M_ij = |a_ij| + Σ|b_k,ij| with negative a_ii left out. ρ is bounded from above by the
 * largest quotient (Mv)_i / v_i of power iterates (Collatz 1942).
 */
function rootBound(problem: Problem): { bound: number; norm: number } {
  const { n, K, jac } = problem;
  const width = n * (K + 1);
  const m = new Float64Array(n * n);
  let diagonal = 0;
  for (let i = 0; i < n; i++) {
    for (let k = 0; k <= K; k++) {
      for (let j = 0; j < n; j++) {
        const v = jac[i * width + k * n + j]!;
        if (k === 0 && i === j) diagonal = Math.max(diagonal, Math.abs(v));
        m[i * n + j] = m[i * n + j]! + (k === 0 && i === j ? Math.max(v, 0) : Math.abs(v));
      }
    }
  }
  let v = new Float64Array(n).fill(1);
  let bound = Number.POSITIVE_INFINITY;
  for (let pass = 0; pass < 40; pass++) {
    const next = new Float64Array(n);
    let ratio = 0;
    let largest = 0;
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) next[i] = next[i]! + m[i * n + j]! * v[j]!;
      ratio = Math.max(ratio, next[i]! / v[i]!);
    }
    bound = Math.min(bound, ratio);
    // The mean with the iterate before damps the turning of a cyclic matrix.
    for (let i = 0; i < n; i++) {
      next[i] = next[i]! + ratio * v[i]!;
      largest = Math.max(largest, next[i]!);
    }
    if (!(largest > 0)) break;
    v = next.map((x) => Math.max(x / largest, 1e-8));
  }
  return { bound, norm: Math.max(bound, diagonal) };
}

interface Mesh {
  readonly points: Float64Array;
  readonly weights: Float64Array;
  readonly derivative: Float64Array;
}
const meshes = new Map<number, Mesh>();

/** Chebyshev points on [−1, 1] from +1 down, barycentric weights, differentiation matrix (Trefethen 2000). */
function mesh(order: number): Mesh {
  const known = meshes.get(order);
  if (known) return known;
  const m = order + 1;
  const points = Float64Array.from({ length: m }, (_, i) => Math.cos((Math.PI * i) / order));
  const weights = Float64Array.from(
    { length: m },
    (_, i) => (i % 2 ? -1 : 1) * (i === 0 || i === order ? 0.5 : 1),
  );
  const derivative = new Float64Array(m * m);
  for (let i = 0; i < m; i++) {
    let sum = 0;
    for (let j = 0; j < m; j++) {
      if (i === j) continue;
      // x_i − x_j as a product of sines: no cancellation.
      const gap =
        2 *
        Math.sin((Math.PI * (i + j)) / (2 * order)) *
        Math.sin((Math.PI * (j - i)) / (2 * order));
      const entry = weights[j]! / weights[i]! / gap;
      derivative[i * m + j] = entry;
      sum += entry;
    }
    derivative[i * m + i] = -sum;
  }
  const made = { points, weights, derivative };
  meshes.set(order, made);
  return made;
}

/** Lagrange basis of the mesh at `at`, by the barycentric formula. */
function basis(grid: Mesh, at: number): Float64Array {
  const m = grid.points.length;
  const out = new Float64Array(m);
  let sum = 0;
  for (let j = 0; j < m; j++) {
    const gap = at - grid.points[j]!;
    if (Math.abs(gap) < 1e-15) {
      out.fill(0);
      out[j] = 1;
      return out;
    }
    out[j] = grid.weights[j]! / gap;
    sum += out[j]!;
  }
  for (let j = 0; j < m; j++) out[j] = out[j]! / sum;
  return out;
}

function collocated(problem: Problem, order: number, longest: number) {
  const { n, K, jac, tau } = problem;
  const grid = mesh(order);
  const m = order + 1;
  const size = n * m;
  const a = new Float64Array(size * size);
  const width = n * (K + 1);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) a[i * size + j] = jac[i * width + j]!;
  }
  for (let k = 1; k <= K; k++) {
    const value = basis(grid, 1 - (2 * tau[k - 1]!) / longest);
    for (let c = 0; c < m; c++) {
      if (value[c] === 0) continue;
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) {
          const at = i * size + c * n + j;
          a[at] = a[at]! + value[c]! * jac[i * width + k * n + j]!;
        }
      }
    }
  }
  const stretch = 2 / longest;
  for (let r = 1; r < m; r++) {
    for (let c = 0; c < m; c++) {
      const d = stretch * grid.derivative[r * m + c]!;
      for (let i = 0; i < n; i++) a[(r * n + i) * size + c * n + i] = d;
    }
  }
  const e = eigenvalues(a, size);
  return e.outcome === 'ok' ? e : null;
}

/** Polishes the leading collocated roots; certain when each kept its own place. */
function certify(
  found: { re: Float64Array; im: Float64Array },
  work: Characteristic,
  scale: Float64Array,
  norm: number,
): { roots: Root[]; certain: boolean } {
  const order = [...found.re.keys()]
    .filter((i) => found.im[i]! >= 0)
    .sort((i, j) => found.re[j]! - found.re[i]!);
  const wanted = work.size + 3;
  const roots: Root[] = [];
  let certain = true;
  for (const i of order) {
    const re = found.re[i]!;
    const im = found.im[i]!;
    // Far to the left a root matters only if it leads; there the order need not resolve it.
    const needed = re > -0.02 * norm || (roots.length === 0 && re > -2 * norm);
    if (roots.length >= wanted && !needed) break;
    const exact = polishRoot(work, scale, re, im, 1e-3 * norm);
    const moved = exact ? Math.hypot(exact.re - re, exact.im - im) : Number.POSITIVE_INFINITY;
    const size = Math.hypot(re, im) + 1e-3 * norm;
    const double =
      exact && roots.some((r) => Math.hypot(r.re - exact.re, r.im - exact.im) < 1e-9 * size);
    if (exact && !double && moved < 1e-2 * size) {
      const tiny = Math.abs(exact.im) < 1e-12 * size;
      roots.push({ re: exact.re, im: tiny ? 0 : Math.abs(exact.im) });
    } else if (needed) {
      // A multiple root does not polish; the collocated value stands, with less accuracy.
      if (!(double && moved < 1e-4 * size)) certain = false;
      roots.push({ re, im });
    } else break;
  }
  roots.sort((p, q) => q.re - p.re);
  return { roots, certain };
}
