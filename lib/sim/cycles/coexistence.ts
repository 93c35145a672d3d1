import type { Branch } from '@/lib/contracts/predict';
import type { CompiledSystem } from '../equations/types';
import type { History } from '../integrate/history';
import { kicked } from './along-branch';
import { settledCycle } from './settled-cycle';

export interface SubcriticalOnset {
  readonly value: number;
  readonly period: number;
  /** The side on which the steady state is unstable. */
  readonly oscillates: 'above' | 'below';
}

const FIRST_STEP = 1e-3;
const SMALLEST_STEP = 1e-6;
/** Less than this share of the range cannot be told from a cycle that dies slowly. */
const NEGLIGIBLE = 5e-4;
const MAX_STEPS = 60;
/** Steps × state length. */
const WORK = 1_000_000;
const ACCURACY = 2e-3;

type Alive = { control: number; history: History; period: number };

/**
 * Where a large cycle and the stable steady state exist side by side next to a subcritical onset.
 *
 * The cycle found on the unstable side is carried over the onset in growing steps, each course going on from the one
 * before, until it dies even at steps of 2e-3 of the range found. `limits` is the control range;
 * `neighbour` the next onset on the stable side, if any. null = no cycle survives the onset by
 * more than 5e-4 of the control range.
 */
export function coexistence(
  system: CompiledSystem,
  p0: Float64Array,
  controlIndex: number,
  onset: SubcriticalOnset,
  found: { branch: Branch; limits: { from: number; to: number }; neighbour?: number },
): { from: number; to: number } | null {
  const { branch, limits } = found;
  const toStable = onset.oscillates === 'above' ? -1 : 1;
  const width = limits.to - limits.from;
  const end = found.neighbour ?? (toStable < 0 ? limits.from : limits.to);
  const budget = { left: WORK };
  const settle = (control: number, from: Float64Array | History, period: number) => {
    const p = Float64Array.from(p0);
    p[controlIndex] = control;
    const settled = settledCycle(system, p, from, period, budget);
    return settled.outcome === 'cycle'
      ? { control, history: settled.history, period: settled.period }
      : null;
  };
  let alive = firstCycle(system, branch, onset, limits, settle);
  if (!alive) return null;
  let step = FIRST_STEP * width;
  for (let i = 0; i < MAX_STEPS && alive.control !== end && budget.left > 0; i += 1) {
    let next: number = alive.control + toStable * step;
    if (toStable * (next - end) > 0) next = end;
    const settled: Alive | null = settle(next, alive.history, alive.period);
    if (settled) {
      alive = settled;
      step *= 1.6;
      continue;
    }
    // A course can also miss the cycle because the step was too long: go on with shorter ones.
    step /= 3;
    const past = toStable * (alive.control - onset.value);
    if (step < (past > 0 ? ACCURACY * past : SMALLEST_STEP * width)) break;
  }
  if (toStable * (alive.control - onset.value) < NEGLIGIBLE * width) return null;
  return toStable < 0
    ? { from: alive.control, to: onset.value }
    : { from: onset.value, to: alive.control };
}

/** A cycle on the unstable side, close to the onset where one can be had. */
function firstCycle(
  system: CompiledSystem,
  branch: Branch,
  onset: SubcriticalOnset,
  limits: { from: number; to: number },
  settle: (control: number, from: Float64Array | History, period: number) => Alive | null,
): Alive | null {
  const side = onset.oscillates === 'above' ? 1 : -1;
  const end = side > 0 ? limits.to : limits.from;
  for (const share of [0.02, 0.05, 0.1]) {
    const control = onset.value + (end - onset.value) * share;
    const found = settle(control, kicked(system, branch, control), onset.period);
    if (found) return found;
  }
  return null;
}
