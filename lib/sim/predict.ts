import {
  type Branch,
  type Cycle,
  EngineError,
  type Note,
  type PredictAnswer,
  type PredictedOnset,
  type PredictRequest,
} from '@/lib/contracts';
import { cyclesAlongBranch } from './cycles/along-branch';
import { checkDoseMap, controlToDose } from './dose-map';
import { checkDelays } from './equations/check-delays';
import type { CompiledSystem } from './equations/types';
import { type Analysis, analyse, analysisNotes, type Range } from './onset/analyse';
import { coexistenceWindow } from './onset/coexistence';
import { inspectCrossing } from './onset/locate';
import { criticalityAt } from './onset/lyapunov';
import { type Onset, sideOf } from './onset/scan';
import { compileRequestModel } from './request-model';
import { FINE_STEP } from './steady/node';
import { propagate } from './uncertainty/propagate';

export interface PredictHooks {
  progress?(done: number, total: number, what: string): void;
  cancelled?(): boolean;
}

/** Share of the progress that the oscillations take, in draws. */
const CYCLES_SHARE = 100;
/** Settling over more periods than this counts as slow. */
const SLOW_PERIODS = 20;

/**
 * Where the steady state turns into a sustained oscillation as the control moves through its range.
 *
 * @throws EngineError 'invalid-request', 'invalid-equation', 'no-steady-state', 'limit-exceeded'
 */
export function predict(request: PredictRequest, hooks: PredictHooks = {}): PredictAnswer {
  const { model, control } = request;
  checkDoseMap(control.doseMap);
  const system = compileRequestModel(model);
  const range = rangeOf(system, request);
  checkDelays(system, system.values, range.controlIndex, range.from, range.to);
  const total = request.draws + CYCLES_SHARE;
  hooks.progress?.(0, total, 'following the steady state');
  const analysis = analyse(system, system.values, range, system.start, {
    largestStep: FINE_STEP,
    cancelled: hooks.cancelled,
  });
  stopIfCancelled(hooks);
  const notes: Note[] = analysisNotes(analysis);
  const branch = branchAnswer(analysis);
  const plain = analysis.scan.onsets.map((o) => describeOnset(analysis, o, request, hooks));
  stopIfCancelled(hooks);
  const spreads =
    request.draws > 0
      ? propagate(system, request, range, analysis, hooks, total)
      : plain.map(() => null);
  const onsets = plain.map((o, k) => ({ ...o, spread: spreads[k] ?? null }));
  notes.push(...settlingNotes(onsets, request), ...spreadNotes(onsets));
  stopIfCancelled(hooks);
  hooks.progress?.(request.draws, total, 'following the oscillation');
  const cycles = request.cycles ? cyclesOf(system, range, branch, onsets, notes) : [];
  stopIfCancelled(hooks);
  hooks.progress?.(total, total, 'done');
  return { onsets, branch, cycles, notes };
}

function stopIfCancelled(hooks: PredictHooks): void {
  if (hooks.cancelled?.()) throw new EngineError('limit-exceeded', 'cancelled');
}

/** The oscillations themselves, where they can be followed; what cannot be is noted, never invented. */
function cyclesOf(
  system: CompiledSystem,
  range: Range,
  branch: Branch,
  onsets: readonly PredictedOnset[],
  notes: Note[],
): Cycle[] {
  const { cycles, omitted } = cyclesAlongBranch(system, system.values, range.controlIndex, {
    branch,
    onsets,
  });
  if (omitted.length > 0) {
    const first = omitted[0]!;
    notes.push({
      code: 'cycles-incomplete',
      text: `at ${omitted.length} of ${omitted.length + cycles.length} control values no cycle is given; at ${Number(first.control.toPrecision(6))}: ${first.why}`,
    });
  }
  return cycles;
}

function rangeOf(system: CompiledSystem, request: PredictRequest): Range {
  const { symbol, from, to } = request.control;
  const controlIndex = system.parameterIndex(symbol);
  if (controlIndex < 0) {
    throw new EngineError(
      'invalid-request',
      `${symbol} is not a parameter of the model: the control must be one of ${system.parameters.join(', ')}`,
      'control.symbol',
    );
  }
  if (!(from < to)) {
    throw new EngineError('invalid-request', 'from must lie below to', 'control.from');
  }
  return { controlIndex, from, to };
}

function describeOnset(
  analysis: Analysis,
  onset: Onset,
  request: PredictRequest,
  hooks: PredictHooks,
): PredictedOnset {
  const { context } = analysis;
  const { variables } = context.problem.system;
  inspectCrossing(context, onset);
  const kind = criticalityAt(context, onset) ?? {
    criticality: 'degenerate' as const,
    lyapunov: 0,
  };
  return {
    value: onset.control,
    period: (2 * Math.PI) / onset.omega,
    criticality: kind.criticality,
    lyapunov: kind.lyapunov,
    oscillates: sideOf(onset),
    growthSlope: onset.growthSlope,
    coexistence:
      kind.criticality === 'subcritical'
        ? coexistenceWindow(context.problem.system, analysis, onset, hooks.cancelled)
        : null,
    steadyState: Object.fromEntries(variables.map((v, i) => [v, onset.x[i]!])),
    dose: controlToDose(request.control.doseMap, onset.control),
    spread: null,
  };
}

/** Near an onset the steady state takes long to settle (three time constants, 95 %): where, and how long. */
function settlingNotes(onsets: readonly PredictedOnset[], request: PredictRequest): Note[] {
  const { control, model } = request;
  return onsets.flatMap((o): Note[] => {
    const distance = 3 / (SLOW_PERIODS * o.period * Math.abs(o.growthSlope));
    if (!(distance > 0.02 * (control.to - control.from))) return [];
    const digits = (v: number) => Number(v.toPrecision(3));
    return [
      {
        code: 'slow-settling',
        text: `within ${digits(distance)} of the onset at ${Number(o.value.toPrecision(6))} a disturbance takes more than ${SLOW_PERIODS} periods (${digits(SLOW_PERIODS * o.period)} ${model.timeUnit}) to settle or to grow`,
      },
    ];
  });
}

function spreadNotes(onsets: readonly PredictedOnset[]): Note[] {
  const notes: Note[] = [];
  for (const o of onsets) {
    const at = `the onset at ${Number(o.value.toPrecision(6))}`;
    if (o.spread && o.spread.none > 0) {
      const share = Number((100 * o.spread.none).toPrecision(3));
      notes.push({
        code: 'draws-without-onset',
        text: `${share} % of the draws have no counterpart of ${at} within the range`,
      });
    }
    if (o.dose === null) {
      notes.push({ code: 'dose-unreachable', text: `no dose of the dose map reaches ${at}` });
    } else if (o.spread?.doses.some((d) => d === null)) {
      const missing = o.spread.doses.filter((d) => d === null).length;
      notes.push({
        code: 'dose-unreachable',
        text: `in ${missing} of ${o.spread.draws} draws no dose reaches ${at}`,
      });
    }
  }
  return notes;
}

function branchAnswer({ scan, context }: Analysis): Branch {
  const { nodes } = scan;
  const { variables } = context.problem.system;
  return {
    control: nodes.map((n) => n.control),
    growthRate: nodes.map((n) => n.spectrum.roots[0]!.re),
    frequency: nodes.map((n) => n.spectrum.roots[0]!.im),
    stable: nodes.map((n) => n.spectrum.unstable === 0),
    steadyState: Object.fromEntries(variables.map((v, i) => [v, nodes.map((n) => n.x[i]!)])),
  };
}
