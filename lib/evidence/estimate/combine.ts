import type { Interval } from '@/lib/contracts';
import type { Bracket } from './bracket';
import { studentT95 } from './line';
import type { Worked } from './methods';

const POINTS = 2001;

/** The onset on a grid: control and relative density. */
export type Density = { x: number[]; p: number[] };

/**
 * Density of one method's onset: even over a bracket (ends softened by the doses' own error),
 * otherwise two half-normals that meet at the value.
 */
function densityAt(method: Worked, x: number): number {
  const i = method.onset!;
  if (method.name === 'bracket' && method.bracket) {
    const edge = 0.02 * (method.bracket.high - method.bracket.low);
    return (
      1 /
      (1 + Math.exp(-(x - method.bracket.low) / edge)) /
      (1 + Math.exp((x - method.bracket.high) / edge))
    );
  }
  const sd = Math.max((x < i.value ? i.value - i.low : i.high - i.value) / 1.645, 1e-300);
  return Math.exp(-0.5 * ((x - i.value) / sd) ** 2);
}

/** Product of the methods' densities (they use different parts of the evidence). */
export function product(methods: Worked[]): Density | null {
  const ends = methods.flatMap((m) => [m.onset!.low, m.onset!.high]);
  const [low, high] = [Math.min(...ends), Math.max(...ends)];
  const pad = 0.6 * (high - low);
  if (!(high > low)) return null;
  const x = Array.from(
    { length: POINTS },
    (_, k) => low - pad + ((high - low + 2 * pad) * k) / (POINTS - 1),
  );
  const p = x.map((v) => methods.reduce((s, m) => s * densityAt(m, v), 1));
  return p.some((v) => v > 0) ? { x, p } : null;
}

export function quantile(d: Density, q: number): number {
  const total = d.p.reduce((s, v) => s + v, 0);
  let sum = 0;
  for (let k = 0; k < d.x.length; k++) {
    const next = sum + d.p[k]! / total;
    if (next >= q) {
      const step = d.x[1]! - d.x[0]!;
      return d.x[k]! + step * ((q - sum) / Math.max(next - sum, 1e-300) - 0.5);
    }
    sum = next;
  }
  return d.x[d.x.length - 1]!;
}

/** 5, 50 and 95 % points of the methods together; null where they exclude one another. */
export function combine(methods: Worked[]): Interval | null {
  const density = product(methods);
  if (density === null) return null;
  const peak = Math.max(...density.p);
  if (peak < 0.01) return null;
  return {
    value: quantile(density, 0.5),
    low: quantile(density, 0.05),
    high: quantile(density, 0.95),
  };
}

/**
 * Widens an interval by the variance between preparations (their onsets' spread beyond their own
 * intervals, over their number), so that it speaks of the population. Needs three of them.
 */
export function betweenPreparations(onset: Interval, own: Interval[]): Interval {
  const k = own.length;
  if (k < 3) return onset;
  const mean = own.reduce((s, o) => s + o.value / k, 0);
  const spread = own.reduce((s, o) => s + (o.value - mean) ** 2 / (k - 1), 0);
  const within = own.reduce((s, o) => s + ((o.high - o.low) / 3.29) ** 2 / k, 0);
  const extra = studentT95(k - 1) * Math.sqrt(Math.max(0, spread - within) / k);
  return {
    value: onset.value,
    low: onset.value - Math.hypot(onset.value - onset.low, extra),
    high: onset.value + Math.hypot(onset.high - onset.value, extra),
  };
}

/** Evenly spaced probability points of what the methods say, n of them. */
export function evidencePoints(onset: Interval, bracket: Bracket | null, n: number): number[] {
  const method: Worked = {
    name: bracket ? 'bracket' : 'combined',
    onset,
    used: true,
    why: '',
    ...(bracket ? { bracket } : {}),
  };
  const wide = {
    ...method,
    onset: {
      ...onset,
      low: 1.6 * onset.low - 0.6 * onset.value,
      high: 1.6 * onset.high - 0.6 * onset.value,
    },
  };
  const density = product([wide]);
  if (density === null) return Array.from({ length: n }, () => onset.value);
  const p = density.x.map((v) => densityAt(method, v));
  return Array.from({ length: n }, (_, k) => quantile({ x: density.x, p }, (k + 0.5) / n));
}

/** Density of the evidence at x, for weighing predicted draws. */
export function evidenceDensity(onset: Interval, bracket: Bracket | null): (x: number) => number {
  const method: Worked = { name: bracket ? 'bracket' : 'combined', onset, used: true, why: '' };
  return (x) => densityAt(bracket ? { ...method, bracket } : method, x);
}
