import type { CurvePoint, OnsetCurve } from './curve';

const LARGEST = 0.03;
const SMALLEST = 1e-5;
const CAP = 2000;

/**
 * Follows the curve from a point, both ways, while it is an onset curve and stays in both ranges; the
 * edges of the ranges are reached exactly. A closed curve ends where it began.
 */
export function traceCurve(curve: OnsetCurve, start: CurvePoint): CurvePoint[] {
  const n = start.x.length;
  const first = new Float64Array(n + 3);
  first[n + 2] = 1;
  // Where the curve runs level in the second parameter the control makes the better border.
  const ahead = curve.direction(start, first) ?? curve.direction(start, level(n));
  if (!ahead) return [start];
  const forward = walk(curve, start, ahead);
  if (forward.closed) return [start, ...forward.points, start];
  const back = walk(
    curve,
    start,
    ahead.map((v) => -v),
  );
  return [...back.points.reverse(), start, ...forward.points];
}

function level(n: number): Float64Array {
  const v = new Float64Array(n + 3);
  v[n + 1] = 1;
  return v;
}

function walk(
  curve: OnsetCurve,
  start: CurvePoint,
  direction: Float64Array,
): { points: CurvePoint[]; closed: boolean } {
  const points: CurvePoint[] = [];
  let at = start;
  let t = direction;
  let h = 0.002;
  while (points.length < CAP && h >= SMALLEST) {
    const guess = curve.moved(
      at,
      t.map((v) => h * v),
    );
    const found = curve.correct(guess, t);
    const next = found ? curve.direction(found.point, t) : null;
    const turn = next ? next.reduce((sum, v, i) => sum + v * t[i]!, 0) : 0;
    if (!found || !next || turn < 0.97) {
      h /= 3;
      continue;
    }
    const edge = edgeBetween(curve, at, found.point);
    if (edge) {
      if (curve.isOnset(edge)) points.push(edge);
      return { points, closed: false };
    }
    if (!isInside(curve, found.point) || !curve.isOnset(found.point)) {
      h /= 3;
      continue;
    }
    points.push(found.point);
    if (points.length > 5 && distance(curve, found.point, start) < 0.6 * h) {
      return { points, closed: true };
    }
    at = found.point;
    t = next;
    h = Math.min(LARGEST, h * (found.steps <= 4 ? 1.6 : 1));
  }
  return { points, closed: false };
}

export function distance(curve: OnsetCurve, a: CurvePoint, b: CurvePoint): number {
  const { from, to } = curve.secondRange;
  return Math.hypot(
    (a.control - b.control) / curve.context.width,
    (a.second - b.second) / (to - from),
  );
}

function isInside(curve: OnsetCurve, p: CurvePoint): boolean {
  const { context, secondRange } = curve;
  return (
    p.control >= context.from &&
    p.control <= context.to &&
    p.second >= secondRange.from &&
    p.second <= secondRange.to
  );
}

/** The point where the segment leaves the ranges, or null where it stays inside. */
function edgeBetween(curve: OnsetCurve, a: CurvePoint, b: CurvePoint): CurvePoint | null {
  if (isInside(curve, b)) return null;
  const { context, secondRange } = curve;
  const cuts: { share: number; axis: 'control' | 'second'; bound: number }[] = [];
  const note = (axis: 'control' | 'second', bound: number) => {
    const share = (bound - a[axis]) / (b[axis] - a[axis]);
    if (share >= 0 && share <= 1) cuts.push({ share, axis, bound });
  };
  if (b.control < context.from) note('control', context.from);
  if (b.control > context.to) note('control', context.to);
  if (b.second < secondRange.from) note('second', secondRange.from);
  if (b.second > secondRange.to) note('second', secondRange.to);
  cuts.sort((p, q) => p.share - q.share);
  const cut = cuts[0];
  return cut ? pinned(curve, between(a, b, cut.share), cut.axis, cut.bound) : null;
}

export function between(a: CurvePoint, b: CurvePoint, share: number): CurvePoint {
  const mix = (p: number, q: number) => p + share * (q - p);
  return {
    x: a.x.map((v, i) => mix(v, b.x[i]!)),
    omega: mix(a.omega, b.omega),
    control: mix(a.control, b.control),
    second: mix(a.second, b.second),
  };
}

/** The curve's point with one parameter held: Newton across that parameter's axis. */
function pinned(
  curve: OnsetCurve,
  guess: CurvePoint,
  axis: 'control' | 'second',
  bound: number,
): CurvePoint | null {
  const n = guess.x.length;
  const held = new Float64Array(n + 3);
  held[axis === 'control' ? n + 1 : n + 2] = 1;
  const found = curve.correct({ ...guess, [axis]: bound }, held);
  return found ? { ...found.point, [axis]: bound } : null;
}
