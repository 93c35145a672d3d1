import type { Spread } from '@/lib/contracts/model';
import { normalQuantile } from './normal-quantile';

/**
 * The value at probability `u` (0 < u < 1) of a quantity with nominal `value` and the given spread.
 * lognormal: median = value, ln-sd = √ln(1 + cv²). Absent spread: the value itself.
 */
export function spreadQuantile(value: number, spread: Spread | undefined, u: number): number {
  switch (spread?.kind) {
    case undefined:
      return value;
    case 'normal':
      return value + spread.sd * normalQuantile(u);
    case 'lognormal':
      return value * Math.exp(Math.sqrt(Math.log1p(spread.cv * spread.cv)) * normalQuantile(u));
    case 'uniform':
      return spread.low + (spread.high - spread.low) * u;
  }
}
