import type { Interval } from '@/lib/contracts';

/**
 * A value with as many decimals as its interval's width makes sensible (two digits of the width).
 * Without a width: three significant digits.
 */
export function sensible(value: number, width = 0): string {
  if (!Number.isFinite(value)) return 'unknown';
  if (width > 0 && Number.isFinite(width)) {
    const decimals = 1 - Math.floor(Math.log10(width));
    if (decimals > 0 && decimals <= 8) return trimZeros(value.toFixed(decimals));
    if (decimals <= 0 && Math.abs(value) < 1e6) return String(Math.round(value));
  }
  const size = Math.abs(value);
  if (size !== 0 && (size < 1e-4 || size >= 1e6)) return value.toExponential(2).replace('e+', 'e');
  return String(Number(value.toPrecision(3)));
}

function trimZeros(text: string): string {
  return text.includes('.') ? text.replace(/0+$/, '').replace(/\.$/, '') : text;
}

/** "0.48 (0.34–0.62)"; with a negative bound "(−0.15 to 0.03)". */
export function intervalWords(i: Interval): string {
  const width = i.high - i.low;
  const [value, low, high] = [i.value, i.low, i.high].map((v) => minus(sensible(v, width)));
  return i.low < 0 ? `${value} (${low} to ${high})` : `${value} (${low}–${high})`;
}

/** A number's hyphen as a minus sign. */
export function minus(text: string): string {
  return text.startsWith('-') ? `\u2212${text.slice(1)}` : text;
}

const NARROW_SPACE = '\u202f';

/** Value and unit; rates such as "/d" follow without a space. */
export function withUnit(text: string, unit: string): string {
  if (unit === '' || unit === '1') return text;
  return unit.startsWith('/') ? `${text}${unit}` : `${text}${NARROW_SPACE}${unit}`;
}
