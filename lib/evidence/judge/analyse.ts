import type { JudgeRequest } from '@/lib/contracts';
import { lateAmplitude, phasors, type RingTest, ringTest } from './amplitude';
import { secondOrderRhythm, yuleWalker } from './autoregression';
import {
  type DrivenFit,
  type DrivenModel,
  drivenModel,
  fitDrifting,
  fitDriven,
  type GrowthInterval,
  growthInterval,
} from './driven';
import { type Columns, leastSquares } from './least-squares';
import { bestNull, type Null } from './nulls';
import {
  type Bounds,
  bestOscillation,
  bic,
  fitOscillation,
  type Oscillation,
  trendColumns,
} from './oscillation';
import { baluevFalseAlarm, leadingPeaks, periodogram } from './periodogram';
import type { Series } from './prepare';

/** Everything that the verdict is drawn from. Times in records, values in sd of the record. */
export type Analysis = {
  null: Null;
  falseAlarm: number;
  /** Score of the best rhythm over the best account without one, search counted. */
  evidence: number;
  rhythm: Rhythm | null;
  /** Highest frequency that the sampling carries, cycles per record. */
  maxFrequency: number;
  outliers: number;
};

export type Rhythm = {
  oscillation: Oscillation;
  driven: DrivenFit;
  interval: GrowthInterval;
  ring: RingTest | null;
  amplitude: { value: number; halfWidth: number };
  /** Amplitude over the first third (or cycle). */
  early: number;
  /** sd of the fit's scatter over the rhythm's amplitude. */
  noiseRatio: number;
};

export function analyse(full: Series, expected: JudgeRequest['expectedPeriod']): Analysis {
  const floor = Math.max(0.7 * (full.noise ?? 0), 0.01);
  const bounds = frequencyBounds(full, expected);
  const cleaned = withoutOutliers(full, roughResiduals(full, bounds));
  const outliers = full.t.length - cleaned.t.length;
  const { none, oscillation, falseAlarm } = search(cleaned, bounds, floor);
  const bare = { null: none, falseAlarm, maxFrequency: bounds.maxFrequency, outliers };
  if (oscillation === null) return { ...bare, evidence: -Infinity, rhythm: null };
  const n = cleaned.t.length;
  const trend = trendColumns(cleaned.t, oscillation.trendDegree);
  const plain = cleaned.y.map((v, i) => v - oscillation.overtones[i]!);
  const fitted = fitWithDrift(cleaned, plain, trend, floor, bounds, oscillation, none.kind);
  if (fitted === null) return { ...bare, evidence: -Infinity, rhythm: null };
  const { model, driven } = fitted;
  const search_ = Math.log(Math.max(2, bounds.maxFrequency - bounds.minFrequency));
  const free = 4 + oscillation.trendDegree + 2 * (oscillation.harmonics - 1) + fitted.extra;
  const isDriven = driven.logLikelihood - driven.undrivenLogLikelihood > 0.5;
  const cost = ((free + (isDriven ? 1 : 0)) / 2) * Math.log(n) + search_;
  const evidence = driven.logLikelihood - cost - none.score;
  const rhythm = weigh(cleaned, oscillation, driven, growthInterval(model, driven));
  return { ...bare, evidence, rhythm };
}

/**
 * The stochastic oscillation; where noise seems to drive it, one on a wandering level is tried beside it, so
 * that a wandering baseline is not taken for a wandering rhythm.
 */
function fitWithDrift(
  series: Series,
  plain: Float64Array,
  trend: Columns,
  floor: number,
  bounds: Bounds,
  oscillation: Oscillation,
  kind: Null['kind'],
): { model: DrivenModel; driven: DrivenFit; extra: number } | null {
  const starts = drivenStarts(series, oscillation);
  const model = drivenModel(series.t, plain, trend, floor, bounds);
  const driven = fitDriven(model, starts);
  if (driven === null) return null;
  const wanders = kind === 'wandering' || kind === 'bend';
  if (!wanders && driven.logLikelihood - driven.undrivenLogLikelihood < 1.5) {
    return { model, driven, extra: 0 };
  }
  const both = fitDrifting(series.t, plain, trend, floor, bounds, driven);
  const price = Math.log(series.t.length);
  if (both === null || both.driven.logLikelihood - price < driven.logLikelihood) {
    return { model, driven, extra: 0 };
  }
  return { model: both.model, driven: both.driven, extra: 2 };
}

/** Residuals of the best single-harmonic fit, for finding slips. */
function roughResiduals(series: Series, bounds: Bounds): Float64Array {
  const level = leastSquares(trendColumns(series.t, 1), series.y);
  const points = Math.min(3000, Math.ceil(3 * (bounds.maxFrequency - bounds.minFrequency)) + 10);
  const { minFrequency, maxFrequency } = bounds;
  const spectrum = periodogram(series.t, level.residuals, minFrequency, maxFrequency, points);
  const peak = leadingPeaks(spectrum, 1)[0];
  const start = peak && { growth: 0, frequency: peak.frequency };
  const fit = start ? fitOscillation(series, start, 1, 1, bounds) : null;
  return fit?.residuals ?? level.residuals;
}

function weigh(
  series: Series,
  oscillation: Oscillation,
  driven: DrivenFit,
  interval: GrowthInterval,
): Rhythm {
  const { frequency, harmonics, trendDegree } = oscillation;
  const trend = trendColumns(series.t, trendDegree);
  const level = leastSquares(trend, series.y);
  const sequence = phasors(
    series.t,
    level.residuals,
    frequency,
    harmonics,
    frequency >= 40 ? 2 : 1,
  );
  const amplitude = lateAmplitude(series.t, level.residuals, frequency, harmonics);
  const mirrored = Float64Array.from(level.residuals).reverse();
  const sd = Math.sqrt(oscillation.rss / Math.max(1, series.t.length - 4 - 2 * harmonics));
  return {
    oscillation,
    driven,
    interval,
    ring: ringTest(sequence),
    amplitude,
    early: lateAmplitude(mirror(series.t), mirrored, frequency, harmonics).value,
    noiseRatio: sd / Math.max(amplitude.value, 1e-12),
  };
}

function mirror(t: Float64Array): Float64Array {
  return t.map((v) => 1 - v).reverse();
}

/** The last part of a record, from `share` of its length on, as a record of its own. */
export function laterPart(series: Series, share: number): Series {
  const index = Array.from(series.t.keys()).filter((i) => series.t[i]! >= share);
  const first = series.t[index[0]!]!;
  const length = 1 - first;
  const values = index.map((i) => series.y[i]!);
  const mean = values.reduce((s, v) => s + v / values.length, 0);
  const sd = Math.sqrt(values.reduce((s, v) => s + (v - mean) ** 2 / values.length, 0)) || 1;
  return {
    t: Float64Array.from(index, (i) => (series.t[i]! - first) / length),
    y: Float64Array.from(values, (v) => (v - mean) / sd),
    noise: series.noise === null ? null : series.noise / sd,
    span: series.span * length,
    totalSpan: series.totalSpan * length,
    scale: series.scale * sd,
    readings: index.length,
  };
}

function frequencyBounds(series: Series, expected: JudgeRequest['expectedPeriod']): Bounds {
  const gaps = Array.from(series.t.slice(1), (v, i) => v - series.t[i]!).sort((a, b) => a - b);
  const middle = gaps[Math.floor(gaps.length / 2)]!;
  const even = gaps.every((g) => Math.abs(g / middle - Math.round(g / middle)) < 1e-3);
  const nyquist = 0.5 / middle;
  const n = series.t.length;
  let maxFrequency = even ? Math.min(4 * n, nyquist) : Math.min(2 * n, Math.max(nyquist, n / 2));
  if (!even && expected) {
    maxFrequency = Math.min(4 * n, Math.max(maxFrequency, (1.2 * series.span) / expected.low));
  }
  return { minFrequency: 2, maxFrequency: Math.max(2.5, maxFrequency) };
}

function search(series: Series, bounds: Bounds, floor: number) {
  const none = bestNull(series, floor);
  const degree = Math.max(1, none.kind === 'bend' ? none.trendDegree : 1);
  const level = leastSquares(trendColumns(series.t, degree), series.y);
  const { minFrequency, maxFrequency } = bounds;
  const points = Math.min(6000, Math.ceil(5 * (maxFrequency - minFrequency)) + 10);
  const spectrum = periodogram(series.t, level.residuals, minFrequency, maxFrequency, points);
  const peaks = leadingPeaks(spectrum, 4);
  const highest = Math.max(...spectrum.map((p) => p.power));
  const falseAlarm = baluevFalseAlarm(highest, series.t, maxFrequency);
  const starts = peaks.map((p) => p.frequency);
  const strong = leadingPeaks(spectrum, 40).filter((p) => p.power > 0.6 * highest);
  const lowest = Math.min(...strong.map((p) => p.frequency), ...starts);
  if (starts.length === 0) starts.push(minFrequency * 1.05);
  let oscillation = bestOscillation(series, starts, degree, bounds, floor, lowest);
  for (const other of [1, 2, 3]) {
    if (oscillation === null || other === oscillation.trendDegree) continue;
    const again = fitOscillation(series, oscillation, oscillation.harmonics, other, bounds);
    const n = series.t.length;
    const score = (o: Oscillation) => bic(o.rss, n, o.trendDegree, floor);
    if (again && score(again) < score(oscillation)) oscillation = again;
  }
  return { none, oscillation, falseAlarm };
}

function drivenStarts(series: Series, o: Oscillation) {
  const starts = [
    { growth: o.growth, frequency: o.frequency },
    { growth: -0.35 * o.frequency, frequency: o.frequency },
    { growth: -1.5 * o.frequency, frequency: o.frequency },
  ];
  const n = series.t.length;
  const gap = 1 / (n - 1);
  const even = series.t.every((v, i) => Math.abs(v - i * gap) < 1e-3 * gap);
  const ar = even ? yuleWalker(series.y, 2) : null;
  const pole = ar && secondOrderRhythm(ar.coefficients[0]!, ar.coefficients[1]!);
  const frequency = pole ? (n - 1) / pole.polePeriod : 0;
  if (pole && frequency > 2) starts.push({ growth: -(n - 1) / pole.decayTime, frequency });
  return starts;
}

/**
 * Leaves out readings whose residual is over six robust sd, at most one in twelve, unless they come
 * at even intervals: slips of the instrument, not the spikes of a rhythm.
 */
function withoutOutliers(series: Series, residuals: Float64Array): Series {
  const sizes = Array.from(residuals, Math.abs).sort((a, b) => a - b);
  const limit = 6 * 1.4826 * sizes[Math.floor(sizes.length / 2)]!;
  const far = Array.from(residuals.keys()).filter((i) => Math.abs(residuals[i]!) > limit);
  if (far.length === 0 || far.length > series.t.length / 12 || evenlySpaced(far, series.t)) {
    return series;
  }
  const drop = new Set(far);
  const keep = (_: number, i: number) => !drop.has(i);
  return { ...series, t: series.t.filter(keep), y: series.y.filter(keep) };
}

function evenlySpaced(index: number[], t: Float64Array): boolean {
  if (index.length < 4) return false;
  const gaps = index.slice(1).map((i, k) => t[i]! - t[index[k]!]!);
  const mean = gaps.reduce((s, g) => s + g / gaps.length, 0);
  const sd = Math.sqrt(gaps.reduce((s, g) => s + (g - mean) ** 2 / gaps.length, 0));
  return sd < 0.3 * mean;
}
