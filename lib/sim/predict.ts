import {
  type Branch,
  type Cycle,
  EngineError,
  type Note,
  type PredictAnswer,
  type PredictedOnset,
  type PredictRequest,
} from '@/lib/contracts';
import { checkDoseMap, controlToDose } from './dose-map';
import { checkDelays } from './equations/check-delays';
import { compileModel } from './equations/compile';
import type { CompiledSystem } from './equations/types';
import { type Analysis, analyse, analysisNotes, type Range } from './onset/analyse';
import { inspectCrossing } from './onset/locate';
import { criticalityAt } from './onset/lyapunov';
import type { Onset } from './onset/scan';

export interface PredictHooks {
  progress?(done: number, total: number, what: string): void;
  cancelled?(): boolean;
}

/**
 * Where the steady state turns into a sustained oscillation as the control moves through its range.
 *
 * @throws EngineError 'invalid-request', 'invalid-equation', 'no-steady-state', 'limit-exceeded'
 */
export function predict(request: PredictRequest, hooks: PredictHooks = {}): PredictAnswer {
  const { model, control } = request;
  checkDoseMap(control.doseMap);
  const system = compileModel(model);
  const range = rangeOf(system, request);
  checkDelays(system, system.values, range.controlIndex, range.from, range.to);
  hooks.progress?.(0, request.draws, 'following the steady state');
  const analysis = analyse(system, system.values, range, system.start, hooks.cancelled);
  const notes: Note[] = analysisNotes(analysis);
  const onsets = analysis.scan.onsets.map((o) => describe(analysis, o, request));
  const cycles: Cycle[] = [];
  return { onsets, branch: branchAnswer(analysis), cycles, notes };
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

function describe(analysis: Analysis, onset: Onset, request: PredictRequest): PredictedOnset {
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
    oscillates: onset.growthSlope > 0 ? 'above' : 'below',
    growthSlope: onset.growthSlope,
    coexistence: null,
    steadyState: Object.fromEntries(variables.map((v, i) => [v, onset.x[i]!])),
    dose: controlToDose(request.control.doseMap, onset.control),
    spread: null,
  };
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
