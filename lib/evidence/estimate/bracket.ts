import type { Interval } from '@/lib/contracts';
import { type Evidence, isSteady, isSustained } from './levels';

/** The stretch in which the onset lies; `overlap` where verdicts contradict one another within it. */
export type Bracket = { low: number; high: number; overlap: boolean };

/**
 * Between the last steady and the first sustained level, control increasing towards the oscillation.
 * Where sustained levels lie below steady ones, from the last level below all of the former to the
 * first above all of the latter. Null where one end is missing.
 */
export function bracketOf(levels: Evidence[]): Bracket | null {
  const steady = levels.filter(isSteady).map((e) => e.x);
  const sustained = levels.filter(isSustained).map((e) => e.x);
  if (steady.length === 0 || sustained.length === 0) return null;
  const lastSteady = Math.max(...steady);
  const firstSustained = Math.min(...sustained);
  if (lastSteady < firstSustained) return { low: lastSteady, high: firstSustained, overlap: false };
  const low = Math.max(...steady.filter((x) => x < firstSustained));
  const high = Math.min(...sustained.filter((x) => x > lastSteady));
  if (!Number.isFinite(low) || !Number.isFinite(high)) return null;
  return { low, high, overlap: true };
}

/**
 * The central 90 % of an onset spread evenly over the bracket. The doses' own uncertainty at either
 * end, if any, is added in quadrature.
 */
export function bracketInterval(b: Bracket, levels: Evidence[]): Interval {
  const width = b.high - b.low;
  const sdAt = (x: number) => Math.max(0, ...levels.filter((e) => e.x === x).map((e) => e.sd));
  const value = (b.low + b.high) / 2;
  return {
    value,
    low: value - Math.hypot(0.45 * width, 1.645 * sdAt(b.low)),
    high: value + Math.hypot(0.45 * width, 1.645 * sdAt(b.high)),
  };
}
