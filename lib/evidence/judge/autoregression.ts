export type AutoregressiveFit = {
  coefficients: number[];
  /** Innovation variance, with the n/(n − p − 1) correction that R's `ar` uses. */
  variance: number;
};

/**
 * Yule–Walker fit of order p to an evenly sampled series, by Levinson–Durbin recursion
 * (Durbin 1960). Agrees with R's `ar(x, aic = FALSE, order.max = p)`. Null for a constant series.
 */
export function yuleWalker(values: ArrayLike<number>, order: number): AutoregressiveFit | null {
  const n = values.length;
  let mean = 0;
  for (let i = 0; i < n; i++) mean += values[i]! / n;
  const covariance = Array.from({ length: order + 1 }, (_, lag) => {
    let sum = 0;
    for (let i = lag; i < n; i++) sum += (values[i]! - mean) * (values[i - lag]! - mean);
    return sum / n;
  });
  let error = covariance[0]!;
  if (!(error > 0) || n <= order + 1) return null;
  let phi: number[] = [];
  for (let k = 1; k <= order; k++) {
    let top = covariance[k]!;
    for (let j = 1; j < k; j++) top -= phi[j - 1]! * covariance[k - j]!;
    const reflection = top / error;
    phi = [...phi.map((v, j) => v - reflection * phi[k - 2 - j]!), reflection];
    error *= 1 - reflection * reflection;
  }
  return { coefficients: phi, variance: (error * n) / (n - order - 1) };
}

export type SecondOrderRhythm = {
  modulus: number;
  /** Period of the complex pole pair, in samples. */
  polePeriod: number;
  /** Period of the spectral maximum, in samples; null where the spectrum has none inside. */
  peakPeriod: number | null;
  /** Samples in which the correlation decays by 1/e. */
  decayTime: number;
};

/** Rhythm of y_t = φ1 y_{t−1} + φ2 y_{t−2} + e; null where the poles are real or not damped. */
export function secondOrderRhythm(phi1: number, phi2: number): SecondOrderRhythm | null {
  if (!(phi1 * phi1 + 4 * phi2 < 0) || !(phi2 > -1)) return null;
  const modulus = Math.sqrt(-phi2);
  const omega = Math.acos(phi1 / (2 * modulus));
  const peak = (phi1 * (phi2 - 1)) / (4 * phi2);
  return {
    modulus,
    polePeriod: (2 * Math.PI) / omega,
    peakPeriod: Math.abs(peak) < 1 ? (2 * Math.PI) / Math.acos(peak) : null,
    decayTime: -1 / Math.log(modulus),
  };
}
