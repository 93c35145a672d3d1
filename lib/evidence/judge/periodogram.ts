/** One point of a periodogram: cycles per unit of time, and power between 0 and 1. */
export type SpectralPoint = { frequency: number; power: number };

/**
 * Floating-mean (generalised) Lomb–Scargle power 1 − χ²/χ²₀ at one ordinary frequency
 * (Zechmeister & Kürster 2009, A&A 496:577, equal weights). Valid for uneven sampling.
 */
export function floatingMeanPower(
  times: ArrayLike<number>,
  values: ArrayLike<number>,
  frequency: number,
): number {
  return periodogram(times, values, frequency, frequency, 1)[0]!.power;
}

/**
 * Power on an even grid of frequencies from `low` to `high`, both included. Each reading's phasor
 * is turned from one frequency to the next, so that sines are taken once a reading.
 */
export function periodogram(
  times: ArrayLike<number>,
  values: ArrayLike<number>,
  low: number,
  high: number,
  points: number,
): SpectralPoint[] {
  const n = times.length;
  const stepSize = points > 1 ? (high - low) / (points - 1) : 0;
  let mean = 0;
  for (let i = 0; i < n; i++) mean += values[i]! / n;
  const centred = Float64Array.from({ length: n }, (_, i) => values[i]! - mean);
  const turn = (f: number, of: (x: number) => number) =>
    Float64Array.from({ length: n }, (_, i) => of(2 * Math.PI * f * (times[i]! - times[0]!)));
  const cosine = turn(low, Math.cos);
  const sine = turn(low, Math.sin);
  const stepCosine = turn(stepSize, Math.cos);
  const stepSine = turn(stepSize, Math.sin);
  const result: SpectralPoint[] = [];
  for (let k = 0; k < points; k++) {
    result.push({ frequency: low + stepSize * k, power: power(centred, cosine, sine) });
    for (let i = 0; i < n; i++) {
      const c = cosine[i]! * stepCosine[i]! - sine[i]! * stepSine[i]!;
      sine[i] = sine[i]! * stepCosine[i]! + cosine[i]! * stepSine[i]!;
      cosine[i] = c;
    }
  }
  return result;
}

function power(centred: Float64Array, cosine: Float64Array, sine: Float64Array): number {
  const n = centred.length;
  let [yy, c, s, yc, ys, cc, cs] = [0, 0, 0, 0, 0, 0, 0];
  for (let i = 0; i < n; i++) {
    const v = centred[i]!;
    const a = cosine[i]!;
    const b = sine[i]!;
    yy += v * v;
    c += a;
    s += b;
    yc += v * a;
    ys += v * b;
    cc += a * a;
    cs += a * b;
  }
  const ss = n - cc - (s * s) / n;
  cc -= (c * c) / n;
  cs -= (c * s) / n;
  const d = cc * ss - cs * cs;
  if (!(yy > 0)) return 0;
  let explained = 0;
  if (d > 1e-9 * n * n) explained = (ss * yc * yc + cc * ys * ys - 2 * cs * yc * ys) / d;
  else if (cc >= ss && cc > 1e-9 * n) explained = (yc * yc) / cc;
  else if (ss > 1e-9 * n) explained = (ys * ys) / ss;
  return Math.min(1, Math.max(0, explained / yy));
}

/** The local maxima of a periodogram, highest first. */
export function leadingPeaks(spectrum: SpectralPoint[], count: number): SpectralPoint[] {
  return spectrum
    .filter((p, i) => {
      const before = spectrum[i - 1]?.power ?? -1;
      const after = spectrum[i + 1]?.power ?? -1;
      return p.power >= before && p.power > after;
    })
    .sort((a, b) => b.power - a.power)
    .slice(0, count);
}

/**
 * False alarm probability of the highest peak up to `maxFrequency` among n white readings, for
 * power 1 − χ²/χ²₀ with a fitted mean: Baluev 2008, MNRAS 385:1279 (aliasing-free upper bound).
 */
export function baluevFalseAlarm(
  power: number,
  times: ArrayLike<number>,
  maxFrequency: number,
): number {
  const n = times.length;
  if (n < 4) return 1;
  if (power >= 1) return 0;
  let mean = 0;
  for (let i = 0; i < n; i++) mean += times[i]! / n;
  let variance = 0;
  for (let i = 0; i < n; i++) variance += (times[i]! - mean) ** 2 / n;
  const width = maxFrequency * Math.sqrt(4 * Math.PI * variance);
  const gamma = Math.sqrt(2 / (n - 1)) * Math.exp(logGamma((n - 1) / 2) - logGamma((n - 2) / 2));
  const single = (1 - power) ** ((n - 3) / 2);
  const tau = gamma * width * (1 - power) ** ((n - 4) / 2) * Math.sqrt(((n - 1) * power) / 2);
  return Math.min(1, Math.max(0, single - Math.expm1(-tau) * (1 - single)));
}

/** ln Γ(x) for x > 0: Lanczos 1964 (g = 7, nine terms), relative error below 1e-13. */
export function logGamma(x: number): number {
  const terms = [
    0.99999999999980993, 676.5203681218851, -1259.1392167224028, 771.32342877765313,
    -176.61502916214059, 12.507343278686905, -0.13857109526572012, 9.9843695780195716e-6,
    1.5056327351493116e-7,
  ];
  if (x < 0.5) return Math.log(Math.PI / Math.sin(Math.PI * x)) - logGamma(1 - x);
  let sum = terms[0]!;
  for (let k = 1; k < terms.length; k++) sum += terms[k]! / (x - 1 + k);
  const t = x + 6.5;
  return 0.5 * Math.log(2 * Math.PI) + (x - 0.5) * Math.log(t) - t + Math.log(sum);
}
