/**
 * Monotone piecewise cubic through points with strictly rising x and strictly monotone y
 * (Fritsch & Carlson 1980, SIAM J Numer Anal 17:238). Never overshoots the data.
 */
export interface MonotoneCubic {
  readonly x: readonly number[];
  readonly y: readonly number[];
  readonly slope: readonly number[];
}

export function monotoneCubic(x: readonly number[], y: readonly number[]): MonotoneCubic {
  const pieces = x.length - 1;
  const secant = Array.from(
    { length: pieces },
    (_, i) => (y[i + 1]! - y[i]!) / (x[i + 1]! - x[i]!),
  );
  const slope = x.map((_, i) => {
    if (i === 0) return secant[0]!;
    if (i === pieces) return secant[pieces - 1]!;
    return (secant[i - 1]! + secant[i]!) / 2;
  });
  for (let i = 0; i < pieces; i += 1) {
    const a = slope[i]! / secant[i]!;
    const b = slope[i + 1]! / secant[i]!;
    const length = Math.hypot(a, b);
    if (length <= 3) continue;
    slope[i] = (3 * a * secant[i]!) / length;
    slope[i + 1] = (3 * b * secant[i]!) / length;
  }
  return { x, y, slope };
}

function evaluate(c: MonotoneCubic, i: number, s: number): number {
  const h = c.x[i + 1]! - c.x[i]!;
  const r = 1 - s;
  return (
    c.y[i]! * (1 + 2 * s) * r * r +
    c.y[i + 1]! * s * s * (3 - 2 * s) +
    h * s * r * (c.slope[i]! * r - c.slope[i + 1]! * s)
  );
}

/** The value at `at`; null beyond the data. */
export function cubicAt(c: MonotoneCubic, at: number): number | null {
  const last = c.x.length - 1;
  if (!(at >= c.x[0]! && at <= c.x[last]!)) return null;
  let i = 0;
  while (i < last - 1 && at >= c.x[i + 1]!) i += 1;
  if (at === c.x[i + 1]!) return c.y[i + 1]!;
  return evaluate(c, i, (at - c.x[i]!) / (c.x[i + 1]! - c.x[i]!));
}

/** The place where the curve takes `value`, by bisection to the last bit; null beyond the data. */
export function cubicInverse(c: MonotoneCubic, value: number): number | null {
  const last = c.x.length - 1;
  const sign = c.y[last]! > c.y[0]! ? 1 : -1;
  if (!(sign * value >= sign * c.y[0]! && sign * value <= sign * c.y[last]!)) return null;
  let i = 0;
  while (i < last - 1 && sign * value >= sign * c.y[i + 1]!) i += 1;
  if (value === c.y[i]!) return c.x[i]!;
  if (value === c.y[i + 1]!) return c.x[i + 1]!;
  let low = 0;
  let high = 1;
  // Sixty halvings of [0, 1] exhaust a double's precision.
  for (let step = 0; step < 60; step += 1) {
    const middle = (low + high) / 2;
    if (sign * evaluate(c, i, middle) < sign * value) low = middle;
    else high = middle;
  }
  return c.x[i]! + ((low + high) / 2) * (c.x[i + 1]! - c.x[i]!);
}
