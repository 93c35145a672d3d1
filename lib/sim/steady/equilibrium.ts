import { EngineError } from '@/lib/contracts';
import { luFactor } from '../linalg/lu';
import { settle } from './flow';
import { newton } from './newton';
import type { Problem } from './problem';

export interface Equilibrium {
  readonly x: Float64Array;
  /** How it was found: directly, from where the flow settles, or from another guess. */
  readonly route: 'newton' | 'flow' | 'restart';
}

/**
 * The equilibrium at `control`: Newton from `start`; where that fails or leaves the physical range, the
 * state to which the flow from `start` settles (delays ignored); then restarts.
 *
 * @throws EngineError 'no-steady-state' when none is found, and for a conserved quantity (the Jacobian
 *   is singular wherever it is tried: equilibria come in families and none is distinguished).
 */
export function findEquilibrium(
  problem: Problem,
  start: Float64Array,
  control: number,
  seen: Float64Array,
): Equilibrium {
  refuseConservedQuantity(problem, start, control);
  const x = Float64Array.from(start);
  if (newton(problem, x, control, Float64Array.from(seen)) === 'converged') {
    return { x: tidy(x, problem), route: 'newton' };
  }
  const flow = settle(problem, start, control, Float64Array.from(seen));
  if (flow.outcome === 'settled') return { x: tidy(flow.x, problem), route: 'flow' };
  const guesses =
    flow.outcome === 'diverged' ? restarts([start]) : restarts([flow.mean, flow.x, start]);
  for (const guess of guesses) {
    if (newton(problem, guess, control, Float64Array.from(seen)) === 'converged') {
      return { x: tidy(guess, problem), route: 'restart' };
    }
  }
  throw new EngineError(
    'no-steady-state',
    `no steady state was found at ${problem.system.parameters[problem.controlIndex]} = ${control}: neither from the start values nor from where they lead; give start values nearer to it`,
    'model.variables',
  );
}

/** Other guesses: multiples of the given states, and the first with its components moved apart. */
function restarts(base: readonly Float64Array[]): Float64Array[] {
  const mean = base[0]!;
  const start = base[base.length - 1]!;
  const factors = [1, 0.3, 3, 0.1, 10, 0.03, 30, 0.01];
  const out = factors.flatMap((k) => base.map((g) => g.map((v) => k * v)));
  const n = start.length;
  // Components moved against each other, in a fixed order: no chance enters.
  for (let round = 0; round < 24; round++) {
    out.push(
      mean.map((v, i) => (v || 0.1) * 10 ** (1.5 * Math.sin(1 + round * 2.399963 + (i * 4.1) / n))),
    );
  }
  return out;
}

/** Rounding may leave a nonnegative variable at −1e-18; zero is meant. */
function tidy(x: Float64Array, problem: Problem): Float64Array {
  return x.map((v, i) => (problem.system.nonnegative[i] && v < 0 ? 0 : v));
}

/** Throws if the Jacobian is singular, to rounding, at every one of several unrelated states. */
function refuseConservedQuantity(problem: Problem, start: Float64Array, control: number): void {
  const n = problem.n;
  let tried = 0;
  for (let probe = 0; probe < 6; probe++) {
    const x = start.map((v, i) => {
      const wobble = Math.sin(12.9898 * (probe + 1) + 78.233 * (i + 1));
      return probe === 0 ? v : (v || 1) * (1 + 0.4 * wobble);
    });
    if (!problem.linearise(x, control)) continue;
    tried += 1;
    if (!isSingular(Float64Array.from(problem.total), n)) return;
  }
  if (tried === 0) return;
  throw new EngineError(
    'no-steady-state',
    'the equations conserve a quantity (their Jacobian is singular everywhere), so there is no isolated steady state: express one variable by the conserved total and leave out its equation',
    'model.equations',
  );
}

/** Singular to rounding after rows and columns are brought to like size. */
function isSingular(a: Float64Array, n: number): boolean {
  for (let sweep = 0; sweep < 4; sweep++) {
    for (let i = 0; i < n; i++) {
      let row = 0;
      let column = 0;
      for (let j = 0; j < n; j++) row = Math.max(row, Math.abs(a[i * n + j]!));
      if (row === 0) return true;
      for (let j = 0; j < n; j++) a[i * n + j] = a[i * n + j]! / row;
      for (let j = 0; j < n; j++) column = Math.max(column, Math.abs(a[j * n + i]!));
      if (column === 0) return true;
      for (let j = 0; j < n; j++) a[j * n + i] = a[j * n + i]! / column;
    }
  }
  return luFactor(a, n).smallestPivot < 1e-12;
}
