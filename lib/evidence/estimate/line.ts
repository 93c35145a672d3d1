import type { Interval } from '@/lib/contracts';

export type LinePoint = { x: number; y: number; sd: number };

export type ZeroCrossing =
  | { kind: 'crossing'; interval: Interval; slope: number; misfit: number }
  | { kind: 'unbounded'; value: number; slope: number }
  | { kind: 'failed' };

/** Student's t, one-sided 95 % points for 1..10 degrees of freedom; beyond, Cornish–Fisher. */
const T95 = [6.314, 2.92, 2.353, 2.132, 2.015, 1.943, 1.895, 1.86, 1.833, 1.812];

export function studentT95(degrees: number): number {
  if (degrees < 1) return T95[0]!;
  return T95[degrees - 1] ?? 1.6449 + (1.6449 ** 3 + 1.6449) / (4 * degrees);
}

/**
 * Where a weighted straight line crosses zero, with Fieller's 90 % interval (Fieller 1954, JRSS B
 * 16:175). Scatter beyond the stated sds widens it (Birge ratio); with g ≥ 1 it is unbounded.
 */
export function zeroCrossing(points: LinePoint[]): ZeroCrossing {
  const n = points.length;
  const known = points.every((p) => p.sd > 0);
  const w = points.map((p) => (known ? 1 / p.sd ** 2 : 1));
  const sum = w.reduce((s, v) => s + v, 0);
  const centre = points.reduce((s, p, i) => s + w[i]! * p.x, 0) / sum;
  const level = points.reduce((s, p, i) => s + w[i]! * p.y, 0) / sum;
  const sxx = points.reduce((s, p, i) => s + w[i]! * (p.x - centre) ** 2, 0);
  const sxy = points.reduce((s, p, i) => s + w[i]! * (p.x - centre) * (p.y - level), 0);
  if (n < 2 || !(sxx > 0) || sxy === 0) return { kind: 'failed' };
  const slope = sxy / sxx;
  const rss = points.reduce(
    (s, p, i) => s + w[i]! * (p.y - level - slope * (p.x - centre)) ** 2,
    0,
  );
  if (!known && n < 3) return { kind: 'failed' };
  const misfit = n > 2 ? rss / (n - 2) : 1;
  const scale = known ? Math.max(1, misfit) : misfit;
  const t = known && misfit <= 1 ? 1.645 : studentT95(n - 2);
  const [varLevel, varSlope] = [scale / sum, scale / sxx];
  const offset = -level / slope;
  const g = (t * t * varSlope) / (slope * slope);
  if (!(g < 1)) return { kind: 'unbounded', value: centre + offset, slope };
  const half = (t / Math.abs(slope)) * Math.sqrt(varLevel * (1 - g) + offset * offset * varSlope);
  return {
    kind: 'crossing',
    slope,
    misfit,
    interval: {
      value: centre + offset,
      low: centre + (offset - half) / (1 - g),
      high: centre + (offset + half) / (1 - g),
    },
  };
}
