import { EngineError, type JudgeRequest } from '@/lib/contracts';
import { baluevFalseAlarm, leadingPeaks, periodogram } from './periodogram';

/** A record made dimensionless: time runs from 0 to 1, values have mean 0 and sd 1. */
export type Series = {
  t: Float64Array;
  y: Float64Array;
  /** sd of one value's measurement error, in units of `scale`; null when it is not known. */
  noise: number | null;
  /** Length of the part that was weighed, and of the whole record, in the record's time unit. */
  span: number;
  totalSpan: number;
  scale: number;
  /** Readings behind the series, before averaging. */
  readings: number;
};

export type Prepared =
  | { kind: 'series'; series: Series; remarks: string[] }
  | { kind: 'too-few'; readings: number }
  | { kind: 'constant'; readings: number; span: number };

export const MIN_READINGS = 8;
/** Longer records are averaged down to at most this many points. */
export const MAX_POINTS = 1000;
const POINTS_PER_CYCLE = 16;

type Raw = { t: number[]; y: number[] };

/** Applies the valid window, drops missing values, sorts, joins equal times, averages, scales. */
export function prepare(request: JudgeRequest): Prepared {
  if (request.times.length !== request.values.length) {
    throw new EngineError('invalid-request', 'times and values differ in number', 'values');
  }
  const raw = joinEqualTimes(validReadings(request));
  const readings = raw.t.length;
  if (readings < MIN_READINGS) return { kind: 'too-few', readings };
  let [low, high] = [Infinity, -Infinity];
  for (const v of raw.y) {
    low = Math.min(low, v);
    high = Math.max(high, v);
  }
  const span = raw.t[readings - 1]! - raw.t[0]!;
  if (!(high - low > 1e-12 * Math.max(Math.abs(low), Math.abs(high)))) {
    return { kind: 'constant', readings, span };
  }
  const condensed = condense(raw);
  const { series, perPoint } = standardise(condensed.raw);
  const noise = request.noiseSd ? request.noiseSd / Math.sqrt(perPoint(readings)) : 0;
  return {
    kind: 'series',
    remarks: condensed.remarks,
    series: {
      ...series,
      noise: noise > 0 ? noise / series.scale : null,
      readings,
      totalSpan: span,
    },
  };
}

function validReadings(request: JudgeRequest): [number, number][] {
  const from = request.from ?? -Infinity;
  const until = request.until ?? Infinity;
  const pairs: [number, number][] = [];
  let sorted = true;
  for (let i = 0; i < request.times.length; i++) {
    const t = request.times[i]!;
    const v = request.values[i];
    if (v === null || v === undefined || t < from || t > until) continue;
    if (pairs.length > 0 && t < pairs[pairs.length - 1]![0]) sorted = false;
    pairs.push([t, v]);
  }
  return sorted ? pairs : pairs.sort((a, b) => a[0] - b[0]);
}

function joinEqualTimes(pairs: [number, number][]): Raw {
  const raw: Raw = { t: [], y: [] };
  let count = 0;
  for (const [t, v] of pairs) {
    const last = raw.t.length - 1;
    if (last >= 0 && raw.t[last] === t) {
      count++;
      raw.y[last]! += (v - raw.y[last]!) / count;
    } else {
      raw.t.push(t);
      raw.y.push(v);
      count = 1;
    }
  }
  return raw;
}

function standardise(raw: Raw) {
  const n = raw.t.length;
  const span = raw.t[n - 1]! - raw.t[0]!;
  const mean = raw.y.reduce((s, v) => s + v / n, 0);
  // Squares of very large or small values would leave the range of numbers: first by the largest.
  const largest = raw.y.reduce((s, v) => Math.max(s, Math.abs(v - mean)), 0);
  const scale = largest * Math.sqrt(raw.y.reduce((s, v) => s + ((v - mean) / largest) ** 2 / n, 0));
  const series = {
    t: Float64Array.from(raw.t, (v) => (v - raw.t[0]!) / span),
    y: Float64Array.from(raw.y, (v) => (v - mean) / scale),
    span,
    scale,
  };
  return { series, perPoint: (readings: number) => Math.max(1, readings / n) };
}

/**
 * Averages a long record down before the fits. The width follows the strongest rhythm, sought in
 * the whole record coarsely and in its last stretch at full density, so that a fast rhythm is
 * not averaged away; of a rhythm too fast for that, the last stretch is weighed.
 */
function condense(raw: Raw): { raw: Raw; remarks: string[] } {
  const n = raw.t.length;
  if (n <= MAX_POINTS) return { raw, remarks: [] };
  const coarse = average(raw, 0, MAX_POINTS);
  const stretch = { t: raw.t.slice(-2 * MAX_POINTS), y: raw.y.slice(-2 * MAX_POINTS) };
  const fast = n > 2 * MAX_POINTS ? strongestPeriod(stretch) : null;
  const period = fast ?? strongestPeriod(n > 2 * MAX_POINTS ? coarse : stretch);
  const span = raw.t[n - 1]! - raw.t[0]!;
  const needed = period === null ? 0 : (POINTS_PER_CYCLE / 2) * (span / period);
  if (period !== null && needed > MAX_POINTS) {
    const kept = (MAX_POINTS / POINTS_PER_CYCLE) * period;
    const first = raw.t.findIndex((t) => t >= raw.t[n - 1]! - kept);
    const last = average(raw, first, MAX_POINTS);
    return {
      raw: last,
      remarks: [
        `The record holds about ${Math.round(span / period)} cycles; the last ${Math.round(kept / period)} were weighed, averaged to ${last.t.length} points.`,
      ],
    };
  }
  return {
    raw: coarse,
    remarks: [`${n} readings were averaged to ${coarse.t.length} points before fitting.`],
  };
}

/** Means over equal stretches of time from reading `first` on; empty stretches give no point. */
function average(raw: Raw, first: number, bins: number): Raw {
  const n = raw.t.length;
  const start = raw.t[first]!;
  if (n - first <= bins) return { t: raw.t.slice(first), y: raw.y.slice(first) };
  const width = (raw.t[n - 1]! - start) / bins;
  const result: Raw = { t: [], y: [] };
  let [bin, count, sumT, sumY] = [0, 0, 0, 0];
  const close = () => {
    if (count === 0) return;
    result.t.push(sumT / count);
    result.y.push(sumY / count);
    [count, sumT, sumY] = [0, 0, 0];
  };
  for (let i = first; i < n; i++) {
    const own = Math.min(bins - 1, Math.floor((raw.t[i]! - start) / width));
    if (own !== bin) close();
    bin = own;
    count++;
    sumT += raw.t[i]!;
    sumY += raw.y[i]!;
  }
  close();
  return result;
}

/** The period of a peak that white noise would give less than once in 10⁶ records, or null. */
function strongestPeriod(raw: Raw): number | null {
  const n = raw.t.length;
  const span = raw.t[n - 1]! - raw.t[0]!;
  if (!(span > 0)) return null;
  const high = n / (2 * span);
  const spectrum = periodogram(raw.t, raw.y, 2 / span, high, n);
  const peak = leadingPeaks(spectrum, 1)[0];
  if (!peak || baluevFalseAlarm(peak.power, raw.t, high) > 1e-6) return null;
  return 1 / peak.frequency;
}
