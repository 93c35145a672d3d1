import { type Columns, type LinearFit, leastSquares } from './least-squares';
import { levenbergMarquardt } from './levenberg-marquardt';
import type { Series } from './prepare';

/**
 * y = M + trend + e^(σt) Σ_h (a_h cos hωt + b_h sin hωt), time from 0 to 1. Linear coefficients
 * are projected out (variable projection, Golub & Pereyra 1973); σ and ω are found by
 * Levenberg–Marquardt.
 */
export type Oscillation = {
  growth: number;
  frequency: number;
  harmonics: number;
  trendDegree: number;
  rss: number;
  residuals: Float64Array;
  /** The fitted harmonics above the first, at each reading. */
  overtones: Float64Array;
};

/** Fits must keep the decay slower than this many e-foldings a cycle. */
const MAX_DECAY_PER_CYCLE = 3;
const MAX_GROWTH = 12;

/** Legendre polynomials of degree 0..degree on the record. */
export function trendColumns(t: Float64Array, degree: number): Columns {
  const columns: Columns = [new Float64Array(t.length).fill(1)];
  if (degree >= 1) columns.push(t.map((v) => 2 * v - 1));
  for (let k = 2; k <= degree; k++) {
    const a = columns[k - 1]!;
    const b = columns[k - 2]!;
    columns.push(t.map((v, i) => ((2 * k - 1) * (2 * v - 1) * a[i]! - (k - 1) * b[i]!) / k));
  }
  return columns;
}

function harmonicColumns(t: Float64Array, growth: number, frequency: number, h: number): Columns {
  const reference = growth > 0 ? 1 : 0;
  const envelope = t.map((v) => Math.exp(growth * (v - reference)));
  const angle = 2 * Math.PI * h * frequency;
  return [
    t.map((v, i) => envelope[i]! * Math.cos(angle * v)),
    t.map((v, i) => envelope[i]! * Math.sin(angle * v)),
  ];
}

function linearPart(
  series: Pick<Series, 't' | 'y'>,
  growth: number,
  frequency: number,
  harmonics: number,
  trendDegree: number,
): { fit: LinearFit; columns: Columns } {
  const columns = trendColumns(series.t, trendDegree);
  for (let h = 1; h <= harmonics; h++) {
    columns.push(...harmonicColumns(series.t, growth, frequency, h));
  }
  return { fit: leastSquares(columns, series.y), columns };
}

export type Bounds = { minFrequency: number; maxFrequency: number };

/** One local fit from (growth, frequency); null when it leaves the allowed frequencies. */
export function fitOscillation(
  series: Pick<Series, 't' | 'y'>,
  start: { growth: number; frequency: number },
  harmonics: number,
  trendDegree: number,
  bounds: Bounds,
): Oscillation | null {
  const inside = (growth: number, frequency: number) =>
    frequency >= bounds.minFrequency &&
    frequency <= bounds.maxFrequency &&
    growth >= -MAX_DECAY_PER_CYCLE * frequency &&
    growth <= MAX_GROWTH;
  const result = levenbergMarquardt(
    ([growth, frequency]) =>
      inside(growth!, frequency!)
        ? linearPart(series, growth!, frequency!, harmonics, trendDegree).fit.residuals
        : null,
    [start.growth, start.frequency],
    { tolerance: 1e-7, cap: 30 },
  );
  if (result.outcome === 'failed' && !Number.isFinite(result.rss)) return null;
  const [growth, frequency] = result.parameters as [number, number];
  const { fit, columns } = linearPart(series, growth, frequency, harmonics, trendDegree);
  const overtones = new Float64Array(series.t.length);
  for (let c = trendDegree + 3; c < columns.length; c++) {
    for (let i = 0; i < overtones.length; i++) {
      overtones[i]! += fit.coefficients[c]! * columns[c]![i]!;
    }
  }
  return {
    growth,
    frequency,
    harmonics,
    trendDegree,
    rss: fit.rss,
    residuals: fit.residuals,
    overtones,
  };
}

/** Bayesian information criterion of a fit with k free numbers (smaller is better). */
export function bic(rss: number, n: number, k: number, floor: number): number {
  const variance = Math.max(rss / n, floor * floor);
  return n * Math.log(variance) + rss / variance + k * Math.log(n);
}

/**
 * The best oscillation over several starting frequencies: first with one harmonic, then with as
 * many as the sampling carries and the criterion pays for. Half and a third of the best frequency, and the
 * lowest strong line (`lowest`), are tried too, since a spiky rhythm can have its strongest line at an overtone.
 */
export function bestOscillation(
  series: Pick<Series, 't' | 'y'>,
  frequencies: number[],
  trendDegree: number,
  bounds: Bounds,
  floor: number,
  lowest: number,
): Oscillation | null {
  let best: Oscillation | null = null;
  for (const frequency of frequencies) {
    for (const growth of [0, -2.5, -0.8 * frequency]) {
      const fit = fitOscillation(series, { growth, frequency }, 1, trendDegree, bounds);
      if (fit && (best === null || fit.rss < best.rss)) best = fit;
    }
  }
  if (best === null) return null;
  const simple = best;
  const starts = [1, 2, 3].map((part) => ({ ...simple, frequency: simple.frequency / part }));
  starts.push({ ...simple, growth: 0, frequency: lowest });
  const score = (fit: Oscillation, k: number) =>
    bic(fit.rss, series.t.length, 2 * fit.harmonics, floor) + (k > 0 ? 12 : 0);
  let chosen = { fit: simple, score: Infinity };
  starts.forEach((start, k) => {
    const fit = addHarmonics(series, start, Math.min(k + 1, 3), bounds, floor);
    if (fit && score(fit, k) < chosen.score) chosen = { fit, score: score(fit, k) };
  });
  return chosen.fit;
}

function addHarmonics(
  series: Pick<Series, 't' | 'y'>,
  start: Oscillation,
  least: number,
  bounds: Bounds,
  floor: number,
): Oscillation | null {
  const n = series.t.length;
  const most = Math.min(8, Math.floor((0.45 * n) / start.frequency), Math.floor((n - 8) / 4));
  let best: Oscillation | null = least === 1 ? start : null;
  let from: { growth: number; frequency: number } = start;
  let misses = 0;
  for (let h = Math.max(2, least); h <= most && misses < 2; h++) {
    const fit = fitOscillation(series, from, h, start.trendDegree, bounds);
    if (!fit) break;
    from = fit;
    if (
      best === null ||
      bic(fit.rss, n, 2 * h, floor) < bic(best.rss, n, 2 * best.harmonics, floor)
    ) {
      best = fit;
      misses = 0;
    } else {
      misses++;
    }
  }
  return best;
}
