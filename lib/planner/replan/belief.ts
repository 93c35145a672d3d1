import type { Interval } from '@/lib/contracts';
import { normalCdf } from '../design/normal';

/** Where the onset is now thought to be, on the control axis. */
export type Belief = { values: readonly number[] } | { interval: Interval };

const QUANTILES = 99;
/** Half-width of a central 90 % interval in sd. */
const Z90 = 1.6448536269514722;

/** The z with P(Z ≤ z) = p by bisection; error below 1e-12. */
function normalQuantile(p: number): number {
  let [low, high] = [-8, 8];
  for (let i = 0; i < 60; i += 1) {
    const middle = (low + high) / 2;
    if (normalCdf(middle) < p) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/**
 * Draws of the onset on the control axis: as given, or 99 even quantiles of the two half-normals
 * whose central 90 % is the observed interval (its sides may differ).
 */
export function controlDraws(belief: Belief): number[] {
  if ('values' in belief) return [...belief.values];
  const { value, low, high } = belief.interval;
  return Array.from({ length: QUANTILES }, (_, i) => {
    const z = normalQuantile((i + 0.5) / QUANTILES);
    return value + (z / Z90) * (z < 0 ? value - low : high - value);
  });
}
