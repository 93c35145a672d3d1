import type { EstimateRequest, Interval, ObservedOnset } from '@/lib/contracts';
import type { Bracket } from './bracket';
import { evidenceDensity, evidencePoints } from './combine';

export type Predicted = { draws: number[]; median: number; sd: number };

/** sd of ln(true onset / predicted onset): a factor of 2 at 90 %, until a lab has a record of its own. */
const MODEL_DOUBT = Math.log(2) / 1.645;
const DRAWS = 400;
const MAX_DRAWS = 4000;

export function readPrediction(p: EstimateRequest['predicted']): Predicted | null {
  if (!p) return null;
  if ('mean' in p) {
    const draws = normalPoints(DRAWS).map((z) => p.mean + p.sd * z);
    return { draws, median: p.mean, sd: p.sd };
  }
  const sorted = [...p.values].sort((a, b) => a - b);
  const at = (q: number) => sorted[Math.round(q * (sorted.length - 1))]!;
  return { draws: sorted, median: at(0.5), sd: (at(0.95) - at(0.05)) / 3.29 };
}

/**
 * Normalised error E_n = (observed − predicted)/√(U_o² + U_p²), U at k = 2 from 90 % intervals
 * (common practice, ISO/IEC 17043). |E_n| ≤ 1 agrees. An observed onset known no better than half of the
 * range studied cannot tell, unless it differs even so.
 */
export function agreementWith(
  onset: Interval,
  predicted: Predicted,
  range: number,
): NonNullable<ObservedOnset['agreement']> | null {
  const uObserved = ((onset.high - onset.low) / 2) * (2 / 1.645);
  const u = Math.hypot(uObserved, 2 * predicted.sd);
  const difference = onset.value - predicted.median;
  if (!(u > 0)) {
    return { difference, normalisedError: 0, verdict: difference === 0 ? 'agrees' : 'cannot tell' };
  }
  const normalisedError = difference / u;
  if (Math.abs(normalisedError) > 1) return { difference, normalisedError, verdict: 'differs' };
  const vague = range > 0 && uObserved >= 0.5 * range;
  return { difference, normalisedError, verdict: vague ? 'cannot tell' : 'agrees' };
}

/**
 * The prediction after the evidence: predicted draws, spread by model doubt, weighed by the evidence
 * and resampled systematically. More than 2 sd apart, the evidence alone is followed.
 */
export function updatePrediction(
  predicted: Predicted,
  onset: Interval,
  bracket: Bracket | null,
): { values: number[]; overruled: boolean } {
  const n = Math.min(MAX_DRAWS, Math.max(DRAWS, predicted.draws.length));
  const sdObserved = (onset.high - onset.low) / 3.29;
  const apart = Math.abs(onset.value - predicted.median);
  if (apart > 2 * Math.hypot(sdObserved, predicted.sd)) {
    return { values: evidencePoints(onset, bracket, n), overruled: true };
  }
  const doubts = normalPoints(21).map((z) => MODEL_DOUBT * z);
  const positive = predicted.draws.every((d) => d > 0);
  const every = Math.max(1, Math.floor(predicted.draws.length / MAX_DRAWS));
  const scale = Math.max(Math.abs(predicted.median), predicted.sd);
  const points = predicted.draws
    .filter((_, i) => i % every === 0)
    .flatMap((d) => doubts.map((z) => (positive ? d * Math.exp(z) : d + scale * z)))
    .sort((a, b) => a - b);
  const density = evidenceDensity(onset, bracket);
  const values = resample(points, points.map(density), n);
  return values === null
    ? { values: evidencePoints(onset, bracket, n), overruled: true }
    : { values, overruled: false };
}

/** Systematic resampling with linear interpolation between points; null when all weights vanish. */
function resample(points: number[], weights: number[], n: number): number[] | null {
  const total = weights.reduce((s, w) => s + w, 0);
  if (!(total > 1e-12 * points.length)) return null;
  const values: number[] = [];
  let sum = 0;
  let k = 0;
  for (let j = 0; j < n; j++) {
    const target = ((j + 0.5) / n) * total;
    while (k < points.length - 1 && sum + weights[k]! < target) {
      sum += weights[k]!;
      k++;
    }
    values.push(points[k]!);
  }
  return values;
}

/** Quantiles of the standard normal at (k + ½)/n: Acklam's rational approximation (1.2e-9). */
export function normalPoints(n: number): number[] {
  return Array.from({ length: n }, (_, k) => normalQuantile((k + 0.5) / n));
}

function normalQuantile(p: number): number {
  const a = [
    -39.69683028665376, 220.9460984245205, -275.9285104469687, 138.357751867269, -30.66479806614716,
    2.506628277459239,
  ];
  const b = [
    -54.47609879822406, 161.5858368580409, -155.6989798598866, 66.80131188771972,
    -13.28068155288572,
  ];
  const c = [
    -0.007784894002430293, -0.3223964580411365, -2.400758277161838, -2.549732539343734,
    4.374664141464968, 2.938163982698783,
  ];
  const d = [0.007784695709041462, 0.3224671290700398, 2.445134137142996, 3.754408661907416];
  const poly = (k: number[], x: number) => k.reduce((s, v) => s * x + v, 0);
  if (p > 0.5) return -normalQuantile(1 - p);
  if (p < 0.02425) {
    const q = Math.sqrt(-2 * Math.log(p));
    return poly(c, q) / (poly(d, q) * q + 1);
  }
  const q = p - 0.5;
  return (poly(a, q * q) * q) / (poly(b, q * q) * q * q + 1);
}
