import { blurredLevels } from './blurred-levels';
import { certainLevels, roomFor } from './certain-levels';
import type { Reading } from './posterior';
import { expectedVariance } from './posterior';
import type { Atoms, Prior } from './prior';
import { mirrored, pooled } from './prior';
import type { Settable } from './settable';

const REPORT_ATOMS = 250;

/** One predicted onset, ready to be designed for. Doses; `apart`: the smallest step. */
export type OnsetTask = {
  prior: Prior;
  atoms: Atoms;
  reading: Reading;
  oscillates: 'above' | 'below';
  wanted: number;
  apart: number;
};

export function onsetTask(
  prior: Prior,
  request: {
    blur: number;
    replicates: number;
    oscillates: 'above' | 'below';
    levels: number;
    limits?: { smallestStep?: number };
  },
): OnsetTask {
  return {
    prior,
    atoms: request.blur > 0 ? pooled(prior.atoms, REPORT_ATOMS) : prior.atoms,
    reading: { blur: request.blur, replicates: request.replicates },
    oscillates: request.oscillates,
    wanted: request.levels,
    apart: request.limits?.smallestStep ?? 0,
  };
}

/** E[Var(onset | verdicts)] of any set of onset levels under the task. */
export function varianceOf(task: OnsetTask, levels: readonly number[]): number {
  // At certain verdicts a draw that equals a dose counts as steady-side on either axis.
  if (task.reading.blur > 0 || task.oscillates === 'above') {
    return expectedVariance(task.prior, task.atoms, levels, task.reading);
  }
  return expectedVariance(
    mirrored(task.prior),
    task.atoms,
    levels.map((d) => -d),
    task.reading,
  );
}

const flipped = (set: Settable): Settable => ({
  low: -set.high,
  high: -set.low,
  grid: set.grid ? negative(set.grid) : null,
  path: null,
});

/** 0 − d, not −d: no negative zero among the doses. */
const negative = (doses: readonly number[]) => doses.map((d) => 0 - d).reverse();

/** Least distance of neighbouring levels where none is asked for: they stay different doses. */
const LEAST_APART = 1e-3;

function search(task: OnsetTask, set: Settable, equal: readonly number[]): number[] {
  const k = roomFor(set, task.wanted, task.apart);
  const certain = certainLevels(task.prior, set, k, task.apart);
  if (task.reading.blur === 0 || task.prior.sd === 0 || k === 0) return certain;
  const apart = Math.max(
    task.apart,
    set.grid ? 0 : Math.min(task.prior.sd, (set.high - set.low) / (k + 1)) * LEAST_APART,
  );
  const { prior, reading } = task;
  const blurred = blurredLevels(prior, set, reading, certain, equal, apart);
  const kept = [blurred, certain, ...(fits(equal, set, k, apart) ? [equal] : [])];
  const costs = kept.map((levels) => expectedVariance(prior, task.atoms, levels, reading));
  return [...kept[costs.indexOf(Math.min(...costs))]!];
}

function fits(levels: readonly number[], set: Settable, k: number, apart: number): boolean {
  return (
    levels.length === k &&
    levels.every(
      (d, i) =>
        d >= set.low &&
        d <= set.high &&
        (set.grid === null || set.grid.includes(d)) &&
        (i === 0 || d - levels[i - 1]! >= apart),
    )
  );
}

/** The best onset levels within one settable set, rising, and what they leave of the variance. */
export function onsetLevels(
  task: OnsetTask,
  set: Settable,
  equal: readonly number[],
): { doses: number[]; variance: number } {
  const doses =
    task.oscillates === 'above'
      ? search(task, set, equal)
      : negative(
          search(
            { ...task, prior: mirrored(task.prior), atoms: mirroredAtoms(task) },
            flipped(set),
            negative(equal),
          ),
        );
  return { doses, variance: varianceOf(task, doses) };
}

function mirroredAtoms(task: OnsetTask): Atoms {
  return mirrored({ ...task.prior, atoms: task.atoms }).atoms;
}
