import { type Decimals, decimalsFor, fixed, powerOfTen } from './numbers';
import { withUnit } from './units';

/** A best value with the ends of its 90 % interval. */
export type IntervalLike = { value: number; low: number; high: number };

export type IntervalStyle = {
  /** UCUM code, printed after the interval */
  unit?: string | null;
  decimals?: Decimals;
};

function decimalsOf(interval: IntervalLike, style: IntervalStyle): Decimals {
  return style.decimals ?? decimalsFor((interval.high - interval.low) / 2);
}

/** "10.9–14.1"; with a negative bound "−0.15 to 0.03". */
export function rangeText(low: number, high: number, decimals: Decimals): string {
  const ends = [fixed(low, decimals), fixed(high, decimals)];
  return ends.join(low < 0 || high < 0 ? ' to ' : '\u2013');
}

/** The value and the bracketed interval apart, for tables that set them in two sizes. */
export function intervalParts(
  interval: IntervalLike,
  style: IntervalStyle = {},
): { value: string; range: string } {
  const decimals = decimalsOf(interval, style);
  return {
    value: fixed(interval.value, decimals),
    range: `(${rangeText(interval.low, interval.high, decimals)})`,
  };
}

/** Beyond these sizes a common power of ten stands behind the interval. */
const SMALLEST = 1e-3;
const LARGEST = 1e6;

/**
 * "12.4 (10.9–14.1)", with the unit when given: "12.4 (10.9–14.1) mL/h"; very small and very large
 * ones with a common power of ten: "1.0 (0.2–4.0)×10⁻⁶ mol/L".
 */
export function intervalText(interval: IntervalLike, style: IntervalStyle = {}): string {
  const size = Math.max(Math.abs(interval.low), Math.abs(interval.value), Math.abs(interval.high));
  if (size > 0 && (size < SMALLEST || size >= LARGEST) && Number.isFinite(size)) {
    const exponent = Math.floor(Math.log10(size));
    const down = (v: number) => v / 10 ** exponent;
    const scaled = {
      value: down(interval.value),
      low: down(interval.low),
      high: down(interval.high),
    };
    const decimals = Math.max(0, (style.decimals ?? decimalsOf(interval, style)) + exponent);
    const { value, range } = intervalParts(scaled, { decimals });
    return withUnit(`${value} ${range}${powerOfTen(exponent)}`, style.unit);
  }
  const { value, range } = intervalParts(interval, style);
  return withUnit(`${value} ${range}`, style.unit);
}
