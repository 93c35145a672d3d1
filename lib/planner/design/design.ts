import type { DesignAnswer, DesignRequest, Note } from '@/lib/contracts';
import { EngineError } from '@/lib/contracts';
import type { Placed } from './anchors';
import { anchorsOf } from './anchors';
import { limitNotes } from './notes';
import type { OnsetTask } from './onset-levels';
import { onsetLevels, onsetTask, varianceOf } from './onset-levels';
import { priorOf } from './prior';
import { rowsOf } from './rows';
import type { Avoid, Settable } from './settable';
import { clearOf, settableSets, startOf } from './settable';

/** 5 % point of the standard normal: half-width of a central 90 % interval in sd. */
const Z90 = 1.645;

/** `levels` doses at lo + i (hi − lo)/(levels + 1). */
export function equalSpacing(range: readonly [number, number], levels: number): number[] {
  const [lo, hi] = range;
  return Array.from({ length: levels }, (_, i) => lo + ((i + 1) * (hi - lo)) / (levels + 1));
}

export function refuseStepInRandomOrder(request: DesignRequest): void {
  if (request.order === 'randomised' && request.limits?.largestStep !== undefined) {
    throw new EngineError(
      'invalid-request',
      'a largest step cannot be kept in random order: choose another order or drop the step',
      'limits.largestStep',
    );
  }
}

/** Mean, sd after the verdicts, and the same for equal spacing, from the onset levels alone. */
export function expectationOf(
  task: OnsetTask,
  variance: number,
  equal: readonly number[],
): DesignAnswer['expected'] {
  const sd = Math.sqrt(variance);
  const { mean } = task.prior;
  return {
    sd,
    low: mean - Z90 * sd,
    high: mean + Z90 * sd,
    equalSpacingSd: Math.sqrt(varianceOf(task, equal)),
  };
}

/** The set of doses, and the levels in it, that leave the least variance. */
function bestSet(task: OnsetTask, sets: Settable[], equal: readonly number[]) {
  let best: { set: Settable; doses: number[]; variance: number } | null = null;
  for (const set of sets) {
    const found = { set, ...onsetLevels(task, set, equal) };
    const tie = best !== null && found.variance === best.variance;
    const better = best === null || found.variance < best.variance;
    if (better || (tie && best && found.doses.length > best.doses.length)) best = found;
  }
  return best;
}

/** Baseline on the steady side, far side beyond; `anchors.below` counts the baseline. */
function anchorsFor(request: DesignRequest, set: Settable, doses: readonly number[]) {
  const [lo, hi] = request.range;
  const below = request.oscillates === 'below';
  const baseline = request.anchors?.below ?? 1;
  const farSide = request.anchors?.above ?? 1;
  const apart = request.limits?.smallestStep ?? 0;
  const lower = anchorsOf(
    {
      end: lo,
      next: doses[0]!,
      count: below ? farSide : baseline,
      purpose: below ? 'far side' : 'baseline',
    },
    set,
    apart,
  );
  const upper = anchorsOf(
    {
      end: hi,
      next: doses.at(-1)!,
      count: below ? baseline : farSide,
      purpose: below ? 'baseline' : 'far side',
    },
    set,
    apart,
  );
  return { placed: [...lower.placed, ...upper.placed], notes: [...lower.notes, ...upper.notes] };
}

/**
 * Lays down a dose series that finds one predicted onset with the least expected posterior
 * variance, within hard limits. Doses throughout. Certain verdicts (`blur` 0): the exact optimum,
 * the scalar quantiser of Max (1960) and Lloyd (1982); blurred ones: pattern search, in the tests
 * within 1 % of a far longer search. What cannot be met stands in `notes`.
 * Throws `EngineError` for a largest step in random order or one that needs thousands of rungs.
 */
export function design(request: DesignRequest): DesignAnswer {
  return designAvoiding(request, { doses: [], near: 0 });
}

/** `design` with doses that no onset level or anchor may repeat (rungs may pass them). */
export function designAvoiding(request: DesignRequest, avoid: Avoid): DesignAnswer {
  refuseStepInRandomOrder(request);
  const prior = priorOf(request);
  const task = onsetTask(prior, request);
  const equal = equalSpacing(request.range, request.levels);
  const sets = settableSets(request).flatMap((set) => clearOf(set, avoid) ?? []);
  const best = bestSet(task, sets, equal);
  const notes: Note[] = [];
  if (best === null || best.doses.length === 0) {
    notes.push(...limitNotes(request, prior, [], [], sets.length));
    return { levels: [], expected: expectationOf(task, prior.sd ** 2, equal), notes };
  }
  const anchors = anchorsFor(request, best.set, best.doses);
  const placed: Placed[] = [
    ...anchors.placed,
    ...best.doses.map((dose) => ({ dose, purpose: 'onset' as const })),
  ];
  const walk = {
    order: request.order,
    start: startOf(request),
    largestStep: request.limits?.largestStep,
    path: best.set.path,
    seed: request.seed,
  };
  const levels = rowsOf(placed, walk, request.replicates);
  notes.push(...limitNotes(request, prior, best.doses, levels, sets.length), ...anchors.notes);
  return { levels, expected: expectationOf(task, best.variance, equal), notes };
}
