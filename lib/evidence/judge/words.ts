/** A number with two or three significant digits, without an exponent where it can be read. */
export function figure(value: number): string {
  if (value === 0) return '0';
  const size = Math.abs(value);
  if (size >= 1e5 || size < 1e-3) return value.toExponential(1).replace('e+', 'e');
  if (size >= 100) return String(Math.round(value));
  return String(Number(value.toPrecision(size >= 10 ? 3 : 2)));
}

export function plural(value: number, noun: string): string {
  const text = figure(value);
  return `${text} ${noun}${text === '1' ? '' : 's'}`;
}
