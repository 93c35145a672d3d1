import { leastSquares } from './least-squares';
import { trendColumns } from './oscillation';

/** The rhythm's local phasor in successive stretches of one cycle or more. */
export type Phasor = { time: number; cosine: number; sine: number };

/**
 * Local fits of mean, fundamental and overtones over stretches of `cyclesEach` cycles, turned back
 * by the mean frequency, so that a steady rhythm gives one and the same phasor throughout.
 */
export function phasors(
  t: Float64Array,
  y: Float64Array,
  frequency: number,
  harmonics: number,
  cyclesEach = 1,
): Phasor[] {
  const blocks = Math.floor((frequency * (1 + 1e-9)) / cyclesEach);
  if (blocks > t.length / 3) return [];
  const result: Phasor[] = [];
  for (let b = 0; b < blocks; b++) {
    const index: number[] = [];
    for (let i = 0; i < t.length; i++) {
      if (Math.min(blocks - 1, Math.floor(t[i]! * blocks)) === b) index.push(i);
    }
    const time = Float64Array.from(index, (i) => t[i]!);
    const value = Float64Array.from(index, (i) => y[i]!);
    const used = Math.min(harmonics, Math.floor((index.length - 2) / 2));
    if (used < 1) continue;
    const columns = [new Float64Array(index.length).fill(1)];
    for (let h = 1; h <= used; h++) {
      const angle = 2 * Math.PI * h * frequency;
      columns.push(
        time.map((v) => Math.cos(angle * v)),
        time.map((v) => Math.sin(angle * v)),
      );
    }
    const { coefficients } = leastSquares(columns, value);
    result.push({ time: (b + 0.5) / blocks, cosine: coefficients[1]!, sine: coefficients[2]! });
  }
  return result;
}

export type RingTest = {
  /** Share of chance: how often a rhythm kept up by noise would wander so little in amplitude. */
  chance: number;
  /** Slope of ln(amplitude) per record, and its standard error. */
  slope: number;
  slopeSd: number;
  /** sd of the amplitude over its mean. */
  variation: number;
};

/**
 * Limit cycle or noise-kept rhythm? Noise moves the phasor of a linear rhythm equally in amplitude
 * and in phase; a limit cycle's amplitude is pulled back, so that only its phase wanders. The sums of
 * squares of the two kinds of increment are compared by an F test. Null with fewer than 8 stretches.
 */
export function ringTest(sequence: Phasor[]): RingTest | null {
  if (sequence.length < 8) return null;
  let [radial, tangential] = [0, 0];
  let drift = 0;
  const increments: [number, number][] = [];
  for (let k = 1; k < sequence.length; k++) {
    const [a, b] = [sequence[k - 1]!, sequence[k]!];
    const dx = b.cosine - a.cosine;
    const dy = b.sine - a.sine;
    const mx = (a.cosine + b.cosine) / 2;
    const my = (a.sine + b.sine) / 2;
    const m = Math.hypot(mx, my);
    if (!(m > 0)) continue;
    increments.push([(dx * mx + dy * my) / m, (dy * mx - dx * my) / m]);
    drift += (dy * mx - dx * my) / m;
  }
  drift /= increments.length;
  for (const [r, s] of increments) {
    radial += r * r;
    tangential += (s - drift) ** 2;
  }
  const degrees = increments.length - 1;
  const f = tangential / degrees / Math.max(radial / increments.length, 1e-300);
  return { chance: upperF(f, degrees, increments.length), ...amplitudeTrend(sequence) };
}

function amplitudeTrend(sequence: Phasor[]) {
  const amplitudes = sequence.map((p) => Math.hypot(p.cosine, p.sine));
  const n = amplitudes.length;
  const mean = amplitudes.reduce((s, v) => s + v / n, 0);
  const variation = Math.sqrt(amplitudes.reduce((s, v) => s + (v - mean) ** 2 / (n - 1), 0)) / mean;
  const columns = trendColumns(
    Float64Array.from(sequence, (p) => p.time),
    1,
  );
  const logs = amplitudes.map((v) => Math.log(Math.max(v, 1e-6 * mean)));
  const fit = leastSquares(columns, logs);
  const x = columns[1]!;
  const sxx = x.reduce((s, v) => s + v * v, 0);
  return {
    variation,
    slope: 2 * fit.coefficients[1]!,
    slopeSd: 2 * Math.sqrt(fit.rss / (n - 2) / sxx),
  };
}

/** P(F > f) for the F distribution, by the incomplete beta function. */
export function upperF(f: number, top: number, bottom: number): number {
  if (!(f > 0)) return 1;
  return incompleteBeta(bottom / (bottom + top * f), bottom / 2, top / 2);
}

/** Regularised incomplete beta by Simpson's rule after x = sin²θ (absolute error below 1e-8 for a, b ≥ 1). */
function incompleteBeta(x: number, a: number, b: number): number {
  const weight = (theta: number) => Math.sin(theta) ** (2 * a - 1) * Math.cos(theta) ** (2 * b - 1);
  const integral = (to: number) => {
    const steps = 400;
    let sum = weight(0) + weight(to);
    for (let k = 1; k < steps; k++) sum += (k % 2 === 1 ? 4 : 2) * weight((to * k) / steps);
    return (sum * to) / (3 * steps);
  };
  const total = integral(Math.PI / 2);
  return total > 0 ? Math.min(1, integral(Math.asin(Math.sqrt(Math.min(1, x)))) / total) : 1;
}

/**
 * Half the peak-to-trough swing over the last third (or the last cycle, if longer), from a local fit
 * of the rhythm's shape, with a 90 % half-width from the scatter about it. Units of y.
 */
export function lateAmplitude(
  t: Float64Array,
  y: Float64Array,
  frequency: number,
  harmonics: number,
): { value: number; halfWidth: number } {
  const from = Math.min(2 / 3, 1 - 1 / frequency) - 1e-9;
  let index = Array.from(t.keys()).filter((i) => t[i]! >= from);
  if (index.length < 6) index = Array.from(t.keys()).slice(-Math.min(t.length, 6));
  const time = Float64Array.from(index, (i) => t[i]!);
  const used = Math.max(1, Math.min(harmonics, Math.floor((index.length - 3) / 3)));
  const columns = [new Float64Array(index.length).fill(1)];
  for (let h = 1; h <= used; h++) {
    const angle = 2 * Math.PI * h * frequency;
    columns.push(
      time.map((v) => Math.cos(angle * v)),
      time.map((v) => Math.sin(angle * v)),
    );
  }
  const fit = leastSquares(
    columns,
    index.map((i) => y[i]!),
  );
  let [low, high] = [Infinity, -Infinity];
  for (let k = 0; k < 180; k++) {
    let v = 0;
    for (let h = 1; h <= used; h++) {
      const angle = (2 * Math.PI * h * k) / 180;
      v += fit.coefficients[2 * h - 1]! * Math.cos(angle);
      v += fit.coefficients[2 * h]! * Math.sin(angle);
    }
    low = Math.min(low, v);
    high = Math.max(high, v);
  }
  const free = Math.max(1, index.length - 1 - 2 * used);
  const sd = Math.sqrt(fit.rss / free);
  return { value: (high - low) / 2, halfWidth: 1.645 * sd * Math.sqrt((2 * used) / index.length) };
}
