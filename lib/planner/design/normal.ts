const LN_SQRT_2PI = 0.9189385332046727;

/** Density of the standard normal at z. */
export function normalPdf(z: number): number {
  return Math.exp(-0.5 * z * z - LN_SQRT_2PI);
}

/** Upper tail P(Z > z) for z ≥ 4 by the continued fraction z + 1/(z + 2/(z + 3/…)). */
function upperTail(z: number): number {
  if (z > 38) return 0;
  let fraction = z;
  for (let n = 60; n >= 1; n -= 1) fraction = z + n / fraction;
  return normalPdf(z) / fraction;
}

/**
 * P(Z ≤ z). Power series of Marsaglia 2004 (J Stat Softw 11(4)) for |z| < 4, continued fraction
 * beyond; absolute error below 1e-15, relative error below 1e-13 in the lower tail.
 */
export function normalCdf(z: number): number {
  if (z >= 4) return 1 - upperTail(z);
  if (z <= -4) return upperTail(-z);
  const square = z * z;
  let sum = z;
  let term = z;
  for (let n = 3; n < 200; n += 2) {
    term *= square / n;
    const next = sum + term;
    if (next === sum) break;
    sum = next;
  }
  return 0.5 + sum * normalPdf(z);
}

/** P(a < Z ≤ b), taken in the tail where no digits cancel. */
export function normalMass(a: number, b: number): number {
  return a > 0 ? normalCdf(-a) - normalCdf(-b) : normalCdf(b) - normalCdf(a);
}
