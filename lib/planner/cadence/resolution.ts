/** Largest share of a peak that n even readings a cycle can miss: 1 − cos(π/n). */
export function missedPeak(readingsPerCycle: number): number {
  return 1 - Math.cos(Math.PI / readingsPerCycle);
}

/** Share of the amplitude kept when readings are pooled over `window` of period `period`. */
export function pooledAmplitude(window: number, period: number): number {
  const x = (Math.PI * window) / period;
  return x === 0 ? 1 : Math.abs(Math.sin(x) / x);
}

/**
 * Standard error of a growth rate, per unit of `length`: √(24/N) · (s/A) / T, the Cramér–Rao bound
 * for white noise of sd s on a rhythm of amplitude A whose rate is near zero, N readings over T.
 */
export function rateError(readings: number, noiseShare: number, length: number): number {
  return (Math.sqrt(24 / readings) * noiseShare) / length;
}

/**
 * Record length at which a growth rate lies `z` standard errors from zero, with one reading every
 * `interval`: T = (z √(24 interval) (s/A) / |rate|)^(2/3); infinite where the rate is zero.
 */
export function lengthToTell(rate: number, noiseShare: number, interval: number, z = 1.96): number {
  if (noiseShare === 0) return 0;
  return ((z * Math.sqrt(24 * interval) * noiseShare) / Math.abs(rate)) ** (2 / 3);
}

/** The period that `period` appears to have when read every `interval`: 1/|1/T − k/Δt|. */
export function aliasOf(period: number, interval: number): number {
  const k = Math.round(interval / period);
  const frequency = Math.abs(1 / period - k / interval);
  return frequency === 0 ? Number.POSITIVE_INFINITY : 1 / frequency;
}
