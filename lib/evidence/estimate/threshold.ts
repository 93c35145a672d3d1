import type { Interval } from '@/lib/contracts';

/** Outcomes at one control value: how many (possibly fractional) sustained of how many. */
export type Cell = { x: number; sustained: number; total: number };

export type ThresholdFit = {
  value: number;
  slope: number;
  /** Open ends are null: the verdicts do not bound the threshold there. */
  low: number | null;
  high: number | null;
  separated: boolean;
};

export type ThresholdOptions = {
  /** Drop in log-likelihood at the interval's ends; default for 90 %. */
  drop?: number;
  /** Weak prior that bounds the slope: sd of slope × smallest gap; Infinity leaves it out. */
  slopeSd?: number;
  /** Share of verdicts that are wrong whatever the control (default 0.03; 0 gives the plain logistic). */
  lapse?: number;
};

/** Slope × range is at least this: the change from steady to sustained fits into the levels tried. */
const LEAST_SLOPE = 4;
const NINETY = 2.705543 / 2;

/**
 * Logistic threshold P(sustained) = 1/(1 + e^(−b(x − m))), b > 0, with profile-likelihood interval
 * for m. A small share of wrong verdicts keeps one slip from flattening the curve. A normal penalty on b keeps the fit finite where verdicts separate perfectly (the
 * plain maximum then does not exist: Albert & Anderson 1984, Biometrika 71:1). Null with fewer than
 * two control values or only one kind of outcome.
 */
export function fitThreshold(cells: Cell[], options: ThresholdOptions = {}): ThresholdFit | null {
  const { drop = NINETY, slopeSd = 8, lapse = 0.03 } = options;
  const xs = [...new Set(cells.map((c) => c.x))].sort((a, b) => a - b);
  const hits = cells.reduce((s, c) => s + c.sustained, 0);
  const total = cells.reduce((s, c) => s + c.total, 0);
  if (xs.length < 2 || hits <= 0 || hits >= total) return null;
  const range = xs[xs.length - 1]! - xs[0]!;
  const gap = Math.min(...xs.slice(1).map((x, i) => x - xs[i]!));
  const penalty = (b: number) => (Number.isFinite(slopeSd) ? 0.5 * ((b * gap) / slopeSd) ** 2 : 0);
  const best = (m: number) =>
    maximise(
      (s) => logLikelihood(cells, m, Math.exp(s), lapse) - penalty(Math.exp(s)),
      [Math.log((Number.isFinite(slopeSd) ? LEAST_SLOPE : 0.05) / range), Math.log(60 / gap)],
    );
  const reach = 2 * range;
  const [from, to] = [xs[0]! - reach, xs[xs.length - 1]! + reach];
  const grid = Array.from({ length: 401 }, (_, k) => from + ((to - from) * k) / 400);
  const start = grid.reduce((a, m) => (best(m).value > best(a).value ? m : a), grid[200]!);
  const step = (to - from) / 400;
  const top = maximise((m) => best(m).value, [start - step, start + step]);
  const limit = top.value - drop;
  const edge = (direction: 1 | -1) => {
    let inner = top.at;
    let stride = gap / 8;
    for (let k = 0; k < 60; k++) {
      const outer = inner + direction * stride;
      if (outer < from || outer > to) return null;
      if (best(outer).value < limit) return bisect((m) => best(m).value - limit, inner, outer);
      inner = outer;
      stride *= 1.3;
    }
    return null;
  };
  return {
    value: top.at,
    slope: Math.exp(best(top.at).at),
    low: edge(-1),
    high: edge(1),
    separated: isSeparated(cells),
  };
}

/** All of one outcome below, all of the other above: the plain maximum does not exist. */
export function isSeparated(cells: Cell[]): boolean {
  const withHits = cells.filter((c) => c.sustained > 0).map((c) => c.x);
  const withMisses = cells.filter((c) => c.sustained < c.total).map((c) => c.x);
  return Math.max(...withMisses) < Math.min(...withHits);
}

export function asInterval(fit: ThresholdFit): Interval | null {
  if (fit.low === null || fit.high === null) return null;
  return { value: fit.value, low: fit.low, high: fit.high };
}

function logLikelihood(cells: Cell[], m: number, b: number, lapse: number): number {
  let sum = 0;
  for (const c of cells) {
    const u = b * (c.x - m);
    const hit = lapse > 0 ? Math.log(lapse + (1 - 2 * lapse) / (1 + Math.exp(-u))) : -softplus(-u);
    const miss = lapse > 0 ? Math.log(lapse + (1 - 2 * lapse) / (1 + Math.exp(u))) : -softplus(u);
    sum += c.sustained * hit + (c.total - c.sustained) * miss;
  }
  return sum;
}

/** ln(1 + e^u) without overflow. */
function softplus(u: number): number {
  return u > 0 ? u + Math.log1p(Math.exp(-u)) : Math.log1p(Math.exp(u));
}

/** Golden section after a coarse scan (tolerance 1e-7 of the stretch, 60 steps at most). */
function maximise(f: (x: number) => number, [low, high]: [number, number]) {
  const points = 14;
  let k = 0;
  let top = -Infinity;
  for (let i = 0; i <= points; i++) {
    const v = f(low + ((high - low) * i) / points);
    if (v > top) [top, k] = [v, i];
  }
  let a = low + ((high - low) * Math.max(0, k - 1)) / points;
  let b = low + ((high - low) * Math.min(points, k + 1)) / points;
  const ratio = (Math.sqrt(5) - 1) / 2;
  let [c, d] = [b - ratio * (b - a), a + ratio * (b - a)];
  let [fc, fd] = [f(c), f(d)];
  for (let i = 0; i < 60 && b - a > 1e-7 * Math.abs(high - low); i++) {
    if (fc > fd) {
      [b, d, fd] = [d, c, fc];
      c = b - ratio * (b - a);
      fc = f(c);
    } else {
      [a, c, fc] = [c, d, fd];
      d = a + ratio * (b - a);
      fd = f(d);
    }
  }
  const at = (a + b) / 2;
  return { at, value: f(at) };
}

function bisect(f: (x: number) => number, inner: number, outer: number): number {
  let [a, b] = [inner, outer];
  for (let k = 0; k < 40 && Math.abs(b - a) > 1e-9 * (Math.abs(a) + Math.abs(b)); k++) {
    const m = (a + b) / 2;
    if (f(m) >= 0) a = m;
    else b = m;
  }
  return (a + b) / 2;
}
