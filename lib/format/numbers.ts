/** Narrow no-break space: stands between a figure and its unit. */
export const NARROW_SPACE = '\u202f';
const MINUS = '\u2212';

/** Number of decimals a figure is shown with; negative values round to tens, hundreds. */
export type Decimals = number;

function roundTo(value: number, decimals: Decimals): number {
  if (decimals >= 0) return Number(value.toFixed(Math.min(decimals, 15)));
  const unit = 10 ** -decimals;
  return Math.round(value / unit) * unit;
}

/** Fixed decimals with a true minus sign; minus zero prints as zero. Not finite: an en dash. */
export function fixed(value: number, decimals: Decimals): string {
  if (!Number.isFinite(value)) return '\u2013';
  const rounded = roundTo(value, decimals);
  const text = Math.abs(rounded).toFixed(Math.min(Math.max(decimals, 0), 15));
  return rounded < 0 ? MINUS + text : text;
}

/**
 * A figure with `significant` digits (default 3), trailing zeros kept out, in powers of ten outside
 * 1e-4 … 1e6. Not finite: an en dash.
 */
export function figure(value: number, significant = 3): string {
  if (!Number.isFinite(value)) return '\u2013';
  if (value === 0) return '0';
  const size = Math.abs(value);
  if (size < 1e-4 || size >= 1e6) return scientific(value, significant);
  const exponent = Math.floor(Math.log10(Number(size.toPrecision(significant))));
  const decimals = Math.max(0, significant - 1 - exponent);
  const text = fixed(value, decimals);
  return text.includes('.') ? text.replace(/\.?0+$/, '') : text;
}

const SUPERSCRIPT: Record<string, string> = {
  '-': '\u207b',
  '0': '\u2070',
  '1': '\u00b9',
  '2': '\u00b2',
  '3': '\u00b3',
  '4': '\u2074',
  '5': '\u2075',
  '6': '\u2076',
  '7': '\u2077',
  '8': '\u2078',
  '9': '\u2079',
};

/** Digits and minus of `text` as superscripts. */
export function superscript(text: string): string {
  return [...text].map((c) => SUPERSCRIPT[c] ?? c).join('');
}

/** "×10⁻⁶" */
export function powerOfTen(exponent: number): string {
  return `\u00d710${superscript(String(exponent))}`;
}

function scientific(value: number, significant: number): string {
  const [mantissa = '', exponent = '0'] = value.toExponential(significant - 1).split('e');
  const shown = mantissa.includes('.') ? mantissa.replace(/\.?0+$/, '') : mantissa;
  return shown.replace('-', MINUS) + powerOfTen(Number(exponent));
}

/**
 * Decimals that a value deserves given its half-width of uncertainty: two significant digits of it
 * when its leading digits are 100–354, one for 355–949; 950–999 rounds up to 1000 and keeps two, which is the same last place.
 * Source: rounding rule of the Particle Data Group, Review of Particle Physics, introduction (from memory).
 */
export function decimalsFor(halfWidth: number): Decimals {
  if (!Number.isFinite(halfWidth) || halfWidth <= 0) return 2;
  const exponent = Math.floor(Math.log10(halfWidth) + 1e-12);
  const lead = halfWidth / 10 ** exponent;
  if (lead < 3.55) return 1 - exponent;
  return -exponent;
}

/** Decimals that show `halfWidth` with exactly two significant digits. */
export function fineDecimalsFor(halfWidth: number): Decimals {
  if (!Number.isFinite(halfWidth) || halfWidth <= 0) return 2;
  return 1 - Math.floor(Math.log10(halfWidth) + 1e-12);
}

/** Decimals needed to print multiples of `step` without loss (at most 12). */
export function decimalsOfStep(step: number): Decimals {
  for (let d = 0; d < 12; d++) {
    if (
      Math.abs(step * 10 ** d - Math.round(step * 10 ** d)) <
      1e-9 * 10 ** d * Math.abs(step) + 1e-12
    )
      return d;
  }
  return 12;
}
