import {
  type BoundaryAnswer,
  type BoundaryRequest,
  type Control,
  EngineError,
} from '@/lib/contracts';
import { checkDelays } from '../equations/check-delays';
import type { CompiledSystem } from '../equations/types';
import { analyse } from '../onset/analyse';
import { compileRequestModel } from '../request-model';
import { BranchContext } from '../steady/node';
import { Problem } from '../steady/problem';
import { type CurvePoint, OnsetCurve } from './curve';
import { between, distance, traceCurve } from './trace';

/** Values of the second parameter at which onsets are looked for, as shares of its range. */
const SEEDS = [0.5, 0, 1, 0.25, 0.75, 0.125, 0.375, 0.625, 0.875];

/**
 * The onset curve in two parameters: every curve met by scans at nine values of the second parameter,
 * each as `points` points at equal distances in the plane of the two ranges.
 *
 * @throws EngineError 'invalid-request', 'invalid-equation', 'no-steady-state'
 */
export function boundary(request: BoundaryRequest): BoundaryAnswer {
  const system = compileRequestModel(request.model);
  const controlIndex = indexOf(system, request.control.symbol, 'control.symbol');
  const secondIndex = indexOf(system, request.second.symbol, 'second.symbol');
  refuseImpossible(request, controlIndex, secondIndex);
  const { from, to } = request.control;
  const range = { controlIndex, from, to };
  const context = new BranchContext(
    new Problem(system, system.values, controlIndex),
    from,
    to,
    system.start,
  );
  const curve = new OnsetCurve(context, secondIndex, request.second);
  const traced: CurvePoint[][] = [];
  const refused: EngineError[] = [];
  for (const share of SEEDS) {
    const second = request.second.from + share * (request.second.to - request.second.from);
    for (const start of onsetsAt(system, range, secondIndex, second, refused)) {
      if (traced.some((t) => liesOn(curve, t, start))) continue;
      const points = traceCurve(curve, start);
      if (points.length > 1) traced.push(points);
    }
  }
  if (refused.length === SEEDS.length) throw refused[0]!;
  return { curves: traced.map((t) => asAnswer(spaced(curve, t, request.points))) };
}

function indexOf(system: CompiledSystem, symbol: string, at: string): number {
  const index = system.parameterIndex(symbol);
  if (index >= 0) return index;
  throw new EngineError(
    'invalid-request',
    `${symbol} is not a parameter of the model: choose one of ${system.parameters.join(', ')}`,
    at,
  );
}

function refuseImpossible(request: BoundaryRequest, control: number, second: number): void {
  if (control === second) {
    throw new EngineError(
      'invalid-request',
      'the second parameter must differ from the control',
      'second.symbol',
    );
  }
  if (!(request.second.from < request.second.to)) {
    throw new EngineError('invalid-request', 'from must lie below to', 'second.from');
  }
}

type Range = Pick<Control, 'from' | 'to'> & { controlIndex: number };

/** Onsets at one value of the second parameter; a place without steady state or with a negative delay has none. */
function onsetsAt(
  system: CompiledSystem,
  range: Range,
  secondIndex: number,
  second: number,
  refused: EngineError[],
): CurvePoint[] {
  const p = Float64Array.from(system.values);
  p[secondIndex] = second;
  try {
    checkDelays(system, p, range.controlIndex, range.from, range.to);
    const { scan } = analyse(system, p, range, system.start);
    return scan.onsets.map((o) => ({ ...o, second }));
  } catch (error) {
    if (!(error instanceof EngineError)) throw error;
    refused.push(error);
    return [];
  }
}

function liesOn(curve: OnsetCurve, points: readonly CurvePoint[], p: CurvePoint): boolean {
  for (let i = 1; i < points.length; i++) {
    const [a, b] = [points[i - 1]!, points[i]!];
    const length = distance(curve, a, b);
    const detour = distance(curve, a, p) + distance(curve, p, b) - length;
    const omega = Math.abs(p.omega - a.omega) < 0.2 * a.omega;
    if (omega && detour < 0.02 * length + 1e-7) return true;
  }
  return false;
}

/** `count` points at equal distances along the traced line, each put back onto the curve. */
function spaced(curve: OnsetCurve, line: readonly CurvePoint[], count: number): CurvePoint[] {
  const at = [0];
  for (let i = 1; i < line.length; i++)
    at.push(at[i - 1]! + distance(curve, line[i - 1]!, line[i]!));
  const total = at[at.length - 1]!;
  const out: CurvePoint[] = [line[0]!];
  let i = 1;
  for (let k = 1; k < count - 1; k++) {
    const want = (total * k) / (count - 1);
    while (i < line.length - 1 && at[i]! < want) i += 1;
    const [a, b] = [line[i - 1]!, line[i]!];
    const gap = at[i]! - at[i - 1]!;
    const point = onCurve(curve, a, b, gap > 0 ? (want - at[i - 1]!) / gap : 0);
    if (point) out.push(point);
  }
  out.push(line[line.length - 1]!);
  return out;
}

function onCurve(
  curve: OnsetCurve,
  a: CurvePoint,
  b: CurvePoint,
  share: number,
): CurvePoint | null {
  const n = a.x.length;
  const chord = new Float64Array(n + 3);
  chord[n + 1] = (b.control - a.control) / curve.context.width;
  chord[n + 2] = (b.second - a.second) / (curve.secondRange.to - curve.secondRange.from);
  const size = Math.hypot(chord[n + 1]!, chord[n + 2]!);
  if (!(size > 0)) return null;
  const across = chord.map((v) => v / size);
  return curve.correct(between(a, b, share), across)?.point ?? null;
}

function asAnswer(points: readonly CurvePoint[]) {
  return {
    control: points.map((p) => p.control),
    second: points.map((p) => p.second),
    period: points.map((p) => (2 * Math.PI) / p.omega),
  };
}
