import { leastSquares } from './least-squares';
import { nelderMead } from './nelder-mead';
import { trendColumns } from './oscillation';
import type { Series } from './prepare';
import { makeLikelihood } from './state-space';

/** What the record looks like without a rhythm. */
export type Null = {
  kind: 'flat' | 'trend' | 'bend' | 'approach' | 'wandering';
  /** Log-likelihood less half ln n for each free number. */
  score: number;
  trendDegree: number;
  residuals: Float64Array;
};

/** Gaussian log-likelihood of a fit whose noise is not below `floor`, constants left out. */
export function gaussianLogLikelihood(rss: number, n: number, floor: number): number {
  const variance = Math.max(rss / n, floor * floor);
  return (-n / 2) * Math.log(variance) - rss / (2 * variance) + n / 2;
}

/**
 * The best account without a rhythm: constant, straight, bent (cubic at most), an exponential
 * approach, or a wandering (Ornstein–Uhlenbeck) level with white noise on it.
 */
export function bestNull(series: Series, floor: number): Null {
  const n = series.t.length;
  const cost = (k: number) => (k / 2) * Math.log(n);
  const polynomials = [0, 1, 2, 3].map((degree): Null => {
    const fit = leastSquares(trendColumns(series.t, degree), series.y);
    const kind = degree === 0 ? 'flat' : degree === 1 ? 'trend' : 'bend';
    const score = gaussianLogLikelihood(fit.rss, n, floor) - cost(degree);
    return { kind, score, trendDegree: degree, residuals: fit.residuals };
  });
  const others = [approach(series, floor, cost), ...wandering(series, floor, cost, polynomials)];
  const best = [...polynomials, ...others].reduce((a, b) => (b.score > a.score ? b : a));
  const settling = others[0]!;
  return best.kind === 'bend' && settling.score > best.score - 3 ? settling : best;
}

function approach(series: Series, floor: number, cost: (k: number) => number): Null {
  const n = series.t.length;
  const fitAt = (rate: number) =>
    leastSquares(
      [...trendColumns(series.t, 1), series.t.map((t) => Math.exp(-rate * t))],
      series.y,
    );
  let best = fitAt(2);
  for (let k = 1; k <= 24; k++) {
    const fit = fitAt(1.5 * 1.22 ** k);
    if (fit.rss < best.rss) best = fit;
  }
  const score = gaussianLogLikelihood(best.rss, n, floor) - cost(3);
  return { kind: 'approach', score, trendDegree: 1, residuals: best.residuals };
}

function wandering(
  series: Series,
  floor: number,
  cost: (k: number) => number,
  polynomials: Null[],
): Null[] {
  return [0, 1].map((degree) => {
    const likelihood = makeLikelihood(series.t, series.y, trendColumns(series.t, degree), floor);
    const objective = ([logRate, logVariance]: number[]) => {
      if (Math.abs(logVariance!) > 12 || logRate! < -1 || logRate! > 12) return Infinity;
      const answer = likelihood({
        growth: 0,
        frequency: null,
        drive: 0,
        driftRate: Math.exp(logRate!),
        driftVariance: Math.exp(logVariance!),
      });
      return answer === null ? Infinity : -answer.logLikelihood;
    };
    const value = Math.min(
      ...[1.5, Math.log(series.t.length) - 0.7].map(
        (rate) => nelderMead(objective, [rate, 0.5], [1, 1], 0.02, 60).value,
      ),
    );
    return {
      kind: 'wandering' as const,
      score: -value - cost(2 + degree),
      trendDegree: degree,
      residuals: polynomials[degree]!.residuals,
    };
  });
}
