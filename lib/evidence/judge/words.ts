/** A number with `digits` significant digits (one more from 10 on), without an exponent where it can be read. */
export function figure(value: number, digits = 2): string {
  if (value === 0) return '0';
  const size = Math.abs(value);
  if (size >= 1e5 || size < 1e-3) return value.toExponential(1).replace('e+', 'e');
  if (size >= 10 ** (digits + 1)) return String(Math.round(value));
  return String(Number(value.toPrecision(size >= 10 ? digits + 1 : digits)));
}

export function plural(value: number, noun: string): string {
  const text = figure(value);
  return `${text} ${noun}${text === '1' ? '' : 's'}`;
}
