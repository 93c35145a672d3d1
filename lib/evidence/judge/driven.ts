import type { Columns } from './least-squares';
import { nelderMead } from './nelder-mead';
import type { Bounds } from './oscillation';
import { makeLikelihood, NO_DRIFT } from './state-space';

/** The stochastic oscillation fitted to a record, with the interval of its growth rate. */
export type DrivenFit = {
  growth: number;
  frequency: number;
  /** ln(q/s²), time in records. */
  logDrive: number;
  noiseVariance: number;
  logLikelihood: number;
  /** Best likelihood with the drive held at nothing: the deterministic oscillation. */
  undrivenLogLikelihood: number;
  /** Best growth rate without drive. */
  undrivenGrowth: number;
  frequencySd: number;
};

type Point = { growth: number; frequency: number; logDrive: number };

const LOG_DRIVE = { none: -30, low: -7, high: 17 } as const;
const MAX_GROWTH = 15;

export type DrivenModel = {
  evaluate: (p: Point) => number;
  noiseVariance: (p: Point) => number;
};

export function drivenModel(
  t: Float64Array,
  y: Float64Array,
  trend: Columns,
  floor: number,
  bounds: Bounds,
  drift: Drift = NO_DRIFT,
): DrivenModel {
  const likelihood = makeLikelihood(t, y, trend, floor);
  const at = (p: Point) =>
    likelihood({
      growth: p.growth,
      frequency: p.frequency,
      drive: p.logDrive < LOG_DRIVE.low ? 0 : Math.exp(p.logDrive),
      driftVariance: drift.driftVariance,
      driftRate: drift.driftRate,
    });
  const inside = (p: Point) =>
    p.frequency >= bounds.minFrequency &&
    p.frequency <= bounds.maxFrequency &&
    p.growth <= MAX_GROWTH &&
    p.growth >= -6 * p.frequency - 10 &&
    p.logDrive <= LOG_DRIVE.high;
  return {
    evaluate: (p) => (inside(p) ? (at(p)?.logLikelihood ?? -Infinity) : -Infinity),
    noiseVariance: (p) => at(p)?.noiseVariance ?? Number.POSITIVE_INFINITY,
  };
}

/** A wandering level: variance over s², and relaxation rate per record. */
export type Drift = { driftVariance: number; driftRate: number };

/** Undriven oscillation near the given one, on an Ornstein–Uhlenbeck level; null when none is found. */
export function fitDrift(
  t: Float64Array,
  y: Float64Array,
  trend: Columns,
  floor: number,
  near: { growth: number; frequency: number },
): (Drift & { logLikelihood: number }) | null {
  const likelihood = makeLikelihood(t, y, trend, floor);
  const unpack = ([logRate, logVariance]: number[]): Drift => ({
    driftRate: Math.exp(logRate!),
    driftVariance: Math.exp(logVariance!),
  });
  const objective = (x: number[]) => {
    if (Math.abs(x[1]!) > 12 || x[0]! < 0 || x[0]! > Math.log(4 * t.length)) return Infinity;
    const answer = likelihood({ ...near, growth: x[2]!, drive: 0, ...unpack(x) });
    return answer === null ? Infinity : -answer.logLikelihood;
  };
  const runs = [2.5, Math.log(t.length) - 0.7].map((rate) =>
    nelderMead(objective, [rate, 0, near.growth], [0.8, 1, 0.2], 0.01, 110),
  );
  const best = runs.reduce((a, b) => (b.value < a.value ? b : a));
  return Number.isFinite(best.value) ? { ...unpack(best.point), logLikelihood: -best.value } : null;
}

const SCAN = [-4, -1, 1, 3, 5, 7, 9, 12];

/** Best drive on a coarse grid for given growth and frequency. */
function scanDrive(model: DrivenModel, growth: number, frequency: number): Point {
  let best: Point = { growth, frequency, logDrive: LOG_DRIVE.none };
  let value = model.evaluate(best);
  for (const logDrive of SCAN) {
    const trial = model.evaluate({ growth, frequency, logDrive });
    if (trial > value) {
      value = trial;
      best = { growth, frequency, logDrive };
    }
  }
  return best;
}

/** Maximum likelihood over growth, frequency and drive, from several starts. */
export function fitDriven(
  model: DrivenModel,
  starts: { growth: number; frequency: number }[],
): DrivenFit | null {
  let best: { point: Point; value: number } | null = null;
  let undriven: { point: Point; value: number } | null = null;
  for (const s of starts) {
    const quiet = maximise(model, { ...s, logDrive: LOG_DRIVE.none }, false);
    if (undriven === null || quiet.value > undriven.value) undriven = quiet;
    const begin = scanDrive(model, s.growth, s.frequency);
    const driven = begin.logDrive === LOG_DRIVE.none ? quiet : maximise(model, begin, true);
    if (best === null || driven.value > best.value) best = driven;
  }
  if (best === null || undriven === null || !Number.isFinite(best.value)) return null;
  if (undriven.value > best.value) best = undriven;
  return {
    ...best.point,
    logLikelihood: best.value,
    noiseVariance: model.noiseVariance(best.point),
    undrivenLogLikelihood: undriven.value,
    undrivenGrowth: undriven.point.growth,
    frequencySd: frequencySd(model, best.point, best.value),
  };
}

function maximise(model: DrivenModel, from: Point, free: boolean) {
  const unpack = (x: number[]): Point => ({
    growth: x[0]!,
    frequency: x[1]!,
    logDrive: free ? x[2]! : from.logDrive,
  });
  const start = [from.growth, from.frequency, ...(free ? [from.logDrive] : [])];
  const steps = [Math.max(0.3, 0.2 * Math.abs(from.growth)), 0.15, ...(free ? [1] : [])];
  const result = nelderMead(
    (x) => -model.evaluate(unpack(x)),
    start,
    steps,
    0.005,
    free ? 130 : 80,
  );
  return { point: unpack(result.point), value: -result.value };
}

function frequencySd(model: DrivenModel, p: Point, top: number): number {
  for (const h of [0.02, 0.08, 0.3]) {
    const curvature =
      (model.evaluate({ ...p, frequency: p.frequency + h }) +
        model.evaluate({ ...p, frequency: p.frequency - h }) -
        2 * top) /
      (h * h);
    if (curvature < 0 && Number.isFinite(curvature)) return Math.sqrt(-1 / curvature);
  }
  return Math.max(0.5, 0.2 * p.frequency);
}

/** Likelihood at a given growth rate, frequency and drive at their best there. */
function profile(model: DrivenModel, growth: number, near: Point): { value: number; point: Point } {
  const start = scanDrive(model, growth, near.frequency);
  const kept = { ...near, growth };
  const begin = model.evaluate(kept) > model.evaluate(start) ? kept : start;
  const free = begin.logDrive >= LOG_DRIVE.low;
  const unpack = (x: number[]): Point => ({
    growth,
    frequency: x[0]!,
    logDrive: free ? x[1]! : begin.logDrive,
  });
  const result = nelderMead(
    (x) => -model.evaluate(unpack(x)),
    free ? [begin.frequency, begin.logDrive] : [begin.frequency],
    free ? [0.1, 0.7] : [0.1],
    0.02,
    free ? 45 : 20,
  );
  return { value: -result.value, point: unpack(result.point) };
}

/** Half the 90 % point of chi-square with one degree of freedom. */
const DROP = 2.705543 / 2;

export type GrowthInterval = { low: number; high: number; lowOpen: boolean; highOpen: boolean };

/**
 * 90 % profile-likelihood interval of the growth rate (per record). An end that the record does
 * not bound is put at the model's own limit and marked open.
 */
export function growthInterval(model: DrivenModel, fit: DrivenFit): GrowthInterval {
  const walk = (direction: 1 | -1) => {
    const limit = direction > 0 ? MAX_GROWTH : -6 * fit.frequency - 10;
    let inner = fit.growth;
    let near: Point = fit;
    let stride = 0.15 + 0.1 * Math.abs(fit.growth);
    for (let k = 0; k < 12; k++) {
      let outer = inner + direction * stride;
      if (direction * (outer - limit) > 0) outer = limit;
      const p = profile(model, outer, near);
      if (p.value < fit.logLikelihood - DROP)
        return { end: bisect(model, fit, inner, outer, near), open: false };
      if (outer === limit) break;
      inner = outer;
      near = p.point;
      stride *= 1.8;
    }
    return { end: limit, open: true };
  };
  const down = walk(-1);
  const up = walk(1);
  return { low: down.end, high: up.end, lowOpen: down.open, highOpen: up.open };
}

function bisect(model: DrivenModel, fit: DrivenFit, inside: number, outside: number, near: Point) {
  let [a, b, point] = [inside, outside, near];
  for (let k = 0; k < 4; k++) {
    const middle = (a + b) / 2;
    const p = profile(model, middle, point);
    if (p.value < fit.logLikelihood - DROP) b = middle;
    else [a, point] = [middle, p.point];
  }
  return (a + b) / 2;
}
