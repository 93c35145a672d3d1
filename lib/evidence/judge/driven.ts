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
      drive: driveOf(p),
      driftVariance: drift.driftVariance,
      driftRate: drift.driftRate,
    });
  return {
    evaluate: (p) => (isInside(p, bounds) ? (at(p)?.logLikelihood ?? -Infinity) : -Infinity),
    noiseVariance: (p) => at(p)?.noiseVariance ?? Number.POSITIVE_INFINITY,
  };
}

function driveOf(p: Point): number {
  return p.logDrive < LOG_DRIVE.low ? 0 : Math.exp(p.logDrive);
}

function isInside(p: Point, bounds: Bounds): boolean {
  return (
    p.frequency >= bounds.minFrequency &&
    p.frequency <= bounds.maxFrequency &&
    p.growth <= MAX_GROWTH &&
    p.growth >= -6 * p.frequency - 10 &&
    p.logDrive <= LOG_DRIVE.high
  );
}

/** A wandering level: variance over s², and relaxation rate per record. */
export type Drift = { driftVariance: number; driftRate: number };

type Wide = Point & Drift;

/**
 * Oscillation and wandering level fitted together, driven and not; null when none is found.
 * `near` is the oscillation fitted without a wandering level.
 */
export function fitDrifting(
  t: Float64Array,
  y: Float64Array,
  trend: Columns,
  floor: number,
  bounds: Bounds,
  near: DrivenFit,
): { driven: DrivenFit; model: DrivenModel } | null {
  const value = wideObjective(t, y, trend, floor, bounds);
  const better = <T extends { value: number }>(a: T, b: T) => (b.value > a.value ? b : a);
  const level = { driftVariance: 1, logDrive: LOG_DRIVE.none, frequency: near.frequency };
  const quiet = [3, 0.5 * t.length]
    .map((driftRate) => climb(value, { ...level, driftRate, growth: near.undrivenGrowth }, false))
    .reduce(better);
  const { driftRate } = quiet.point;
  const loud = [near.logDrive, 2]
    .filter((logDrive) => logDrive >= LOG_DRIVE.low)
    .map((logDrive) => climb(value, { ...level, growth: near.growth, driftRate, logDrive }, true))
    .reduce(better, quiet);
  if (!Number.isFinite(loud.value)) return null;
  const model = drivenModel(t, y, trend, floor, bounds, loud.point);
  const { growth, frequency, logDrive } = loud.point;
  return {
    model,
    driven: {
      growth,
      frequency,
      logDrive,
      logLikelihood: loud.value,
      noiseVariance: model.noiseVariance(loud.point),
      undrivenLogLikelihood: quiet.value,
      undrivenGrowth: quiet.point.growth,
      frequencySd: frequencySd(model, loud.point, loud.value),
    },
  };
}

function wideObjective(
  t: Float64Array,
  y: Float64Array,
  trend: Columns,
  floor: number,
  bounds: Bounds,
): (w: Wide) => number {
  const likelihood = makeLikelihood(t, y, trend, floor);
  return (w) => {
    const rate = Math.log(w.driftRate);
    const outside =
      rate < 0 || rate > Math.log(4 * t.length) || Math.abs(Math.log(w.driftVariance)) > 12;
    if (outside || !isInside(w, bounds)) return -Infinity;
    return likelihood({ ...w, drive: driveOf(w) })?.logLikelihood ?? -Infinity;
  };
}

/** Best oscillation and drift from `start`, with the drive free or left out. */
function climb(value: (w: Wide) => number, start: Wide, free: boolean) {
  const unpack = (x: number[]): Wide => ({
    growth: x[0]!,
    frequency: x[1]!,
    driftRate: Math.exp(x[2]!),
    driftVariance: Math.exp(x[3]!),
    logDrive: free ? x[4]! : LOG_DRIVE.none,
  });
  const from = [start.growth, start.frequency, Math.log(start.driftRate), 0];
  const steps = [Math.max(0.3, 0.2 * Math.abs(start.growth)), 0.15, 0.8, 1];
  const result = nelderMead(
    (v) => -value(unpack(v)),
    free ? [...from, start.logDrive] : from,
    free ? [...steps, 1] : steps,
    0.01,
    free ? 260 : 180,
  );
  return { point: unpack(result.point), value: -result.value };
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
