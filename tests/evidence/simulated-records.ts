/** Seeded records with a known truth, for the measured rates of the verdict. */
export type Random = { uniform: () => number; normal: () => number };

/** mulberry32 with Box–Muller; public-domain generator, good enough for rates to a percent. */
export function random(seed: number): Random {
  let a = (seed * 2654435761) >>> 0;
  const uniform = () => {
    a = (a + 0x6d2b79f5) >>> 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
  const normal = () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
  return { uniform, normal };
}

export type Record_ = { times: number[]; values: number[] };

export function evenTimes(n: number, every = 1): number[] {
  return Array.from({ length: n }, (_, i) => i * every);
}

export function white(r: Random, n: number): Record_ {
  return { times: evenTimes(n), values: evenTimes(n).map(() => r.normal()) };
}

export function firstOrder(r: Random, n: number, phi: number): Record_ {
  let x = r.normal() / Math.sqrt(1 - phi * phi);
  const values = evenTimes(n).map(() => {
    x = phi * x + r.normal();
    return x;
  });
  return { times: evenTimes(n), values };
}

/** AR(2) with the given samples per cycle, decaying by 1/e in `decayCycles` cycles; white noise on top. */
export function quasiCycle(
  r: Random,
  n: number,
  perCycle: number,
  decayCycles: number,
  noiseRatio = 0,
): Record_ {
  const modulus = Math.exp(-1 / (decayCycles * perCycle));
  const phi1 = 2 * modulus * Math.cos((2 * Math.PI) / perCycle);
  const phi2 = -modulus * modulus;
  let [a, b] = [0, 0];
  const run: number[] = [];
  for (let k = 0; k < n + 40 * decayCycles * perCycle; k++) {
    [a, b] = [phi1 * a + phi2 * b + r.normal(), a];
    run.push(a);
  }
  const values = run.slice(-n);
  const sd = Math.sqrt(values.reduce((s, v) => s + v * v, 0) / n);
  return { times: evenTimes(n), values: values.map((v) => v + noiseRatio * sd * r.normal()) };
}

/** A e^(σt) cos(2πt/perCycle + φ) + noise; `growthPerCycle` = σ · period. */
export function nudge(
  r: Random,
  cycles: number,
  perCycle: number,
  growthPerCycle: number,
  noise: number,
): Record_ {
  const times = evenTimes(Math.round(cycles * perCycle));
  const phase = 2 * Math.PI * r.uniform();
  return {
    times,
    values: times.map((t) => {
      const c = t / perCycle;
      return Math.exp(growthPerCycle * c) * Math.cos(2 * Math.PI * c + phase) + noise * r.normal();
    }),
  };
}

/** Unit-amplitude rhythm with harmonics, phase diffusion (rad²/cycle) and measurement noise. */
export function limitCycle(
  r: Random,
  times: number[],
  perCycle: number,
  noise: number,
  options: { diffusion?: number; shape?: (phase: number) => number } = {},
): Record_ {
  const { diffusion = 0, shape = Math.cos } = options;
  let phase = 2 * Math.PI * r.uniform();
  let before = times[0]!;
  const values = times.map((t) => {
    const c = (t - before) / perCycle;
    before = t;
    phase += 2 * Math.PI * c + Math.sqrt(diffusion * c) * r.normal();
    return shape(phase) + noise * r.normal();
  });
  return { times, values };
}

/** Slow rise and fall like a relaxation oscillator's voltage, range about ±1. */
export const relaxation = (phase: number) =>
  Math.tanh(3 * Math.cos(phase)) * 0.8 + 0.3 * Math.cos(2 * phase + 0.7);
