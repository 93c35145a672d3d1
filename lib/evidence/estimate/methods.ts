import type { Interval, ObservedOnset } from '@/lib/contracts';
import { type Bracket, bracketInterval, bracketOf } from './bracket';
import { type Evidence, isSteady, isSustained } from './levels';
import { type LinePoint, type ZeroCrossing, zeroCrossing } from './line';
import { asInterval, type Cell, fitThreshold } from './threshold';

export type Method = ObservedOnset['methods'][number];

/** A method's answer with control increasing towards the oscillation. */
export type Worked = Method & { bracket?: Bracket };

export function byBracket(levels: Evidence[]): Worked {
  const bracket = bracketOf(levels);
  if (bracket === null) {
    const why = 'There is no steady level on one side with a sustained one on the other.';
    return { name: 'bracket', onset: null, used: false, why };
  }
  const onset = bracketInterval(bracket, levels);
  return {
    name: 'bracket',
    onset,
    bracket,
    used: !bracket.overlap,
    why: bracket.overlap
      ? 'Steady and sustained levels overlap, so that the bracket spans all of them and the threshold says more.'
      : 'The central 90 % between the last steady and the first sustained level.',
  };
}

export function byThreshold(levels: Evidence[], bracket: Bracket | undefined): Worked {
  const name = 'threshold' as const;
  const cells = levels.map((e): Cell => {
    if (e.verdict === 'undecided') return { x: e.x, sustained: 0.25, total: 0.5 };
    return { x: e.x, sustained: isSustained(e) ? 1 : 0, total: 1 };
  });
  const decided = levels.filter((e) => e.verdict !== 'undecided');
  if (!decided.some(isSteady) || !decided.some(isSustained)) {
    const why = 'Verdicts of one kind alone bound no threshold.';
    return { name, onset: null, used: false, why };
  }
  const fit = fitThreshold(cells);
  const onset = fit && asInterval(fit);
  if (!fit || !onset) {
    const why = 'The verdicts do not bound the threshold on both sides.';
    return { name, onset: null, used: false, why };
  }
  if (bracket && !bracket.overlap) {
    const why =
      'The verdicts change cleanly, so that a slope cannot be estimated; the bracket says all that they do.';
    return { name, onset, used: false, why };
  }
  const why =
    'Logistic threshold with profile interval; undecided levels count half, shared between both verdicts.';
  return { name, onset, used: true, why };
}

/** Levels further out than this ratio of the smallest value are too far for a local law. */
const LOCAL = 6;

/** A² = c(μ − μc): holds near a gentle onset alone (science: square-root law). */
export function byAmplitude(levels: Evidence[], bracket: Bracket | undefined): Worked {
  const name = 'amplitude law' as const;
  const none = (why: string): Worked => ({ name, onset: null, used: false, why });
  const sustained = levels.filter((e) => isSustained(e) && e.amplitude && e.amplitude.value > 0);
  const squares = sustained.map((e) => ({ e, y: e.amplitude!.value ** 2 }));
  const least = Math.min(...squares.map((s) => s.y));
  const near = squares.filter((s) => s.y <= LOCAL * least);
  if (new Set(near.map((s) => s.e.x)).size < 3) {
    return none('Needs amplitudes at three sustained levels near the onset.');
  }
  const points = withControlSd(
    near.map(({ e, y }) => ({ x: e.x, y, sd: 2 * Math.sqrt(y) * sdOf(e.amplitude!) })),
    near.map(({ e }) => e.sd),
  );
  const crossing = zeroCrossing(points);
  if (crossing.kind !== 'crossing' || crossing.slope <= 0) {
    return none('The squared amplitude does not grow clearly with the control.');
  }
  const onset = widenByCurvature(points, crossing.interval);
  const first = Math.min(...sustained.map((e) => e.x));
  if (onset.low > first) return none('The line meets zero inside the sustained levels.');
  if (bracket && onset.high < bracket.low) {
    return {
      name,
      onset,
      used: false,
      why: 'Its onset lies among steady levels: the amplitude jumps there, so that the law does not hold (an abrupt onset).',
    };
  }
  const why = `Squared amplitude against control, straight line through ${near.length} sustained levels; holds for a gentle onset only.`;
  return { name, onset, used: true, why };
}

/** The rate at which a nudge dies away, extrapolated to zero, from steady-side levels alone. */
export function byDecayRate(levels: Evidence[], bracket: Bracket | undefined): Worked {
  const name = 'decay rate' as const;
  const none = (why: string): Worked => ({ name, onset: null, used: false, why });
  const first = Math.min(...levels.filter(isSustained).map((e) => e.x));
  const steady = levels.filter((e) => isSteady(e) && e.growthRate && e.x < first);
  const points = withControlSd(
    steady.map((e) => ({ x: e.x, y: e.growthRate!.value, sd: sdOf(e.growthRate!) })),
    steady.map((e) => e.sd),
  );
  const local = risingEnd(points);
  const places = new Set(local.map((p) => p.x)).size;
  if (places < 2) return none('Needs decay rates at two steady-side levels or more.');
  const crossing = zeroCrossing(local);
  if (crossing.kind === 'unbounded') {
    return none('The decay rates do not yet change clearly with the control.');
  }
  if (crossing.kind !== 'crossing' || crossing.slope <= 0) {
    return none('The decay does not slow down towards the oscillating side.');
  }
  const onset = crossing.interval;
  const last = Math.max(...steady.map((e) => e.x));
  if (onset.high < last || (bracket && onset.low > bracket.high)) {
    const why =
      'Its onset contradicts the verdicts; the rate may not change in a straight line here.';
    return { name, onset, used: false, why };
  }
  const check = places === 2 ? ' Two levels leave its straightness unchecked.' : '';
  const why = `Decay rate against control, straight line through ${places} steady-side levels, extrapolated to zero.${check}`;
  return { name, onset, used: true, why };
}

/**
 * The points next to the onset over which the rate rises: linear only locally, so that levels whose rate
 * is over LOCAL times the slowest (by more than its error), or beyond a turning point, are left out.
 */
function risingEnd(points: LinePoint[]): LinePoint[] {
  const sorted = [...points].sort((a, b) => b.x - a.x);
  const kept: LinePoint[] = [];
  let slowest = Infinity;
  let lowest: LinePoint | null = null;
  for (const p of sorted) {
    slowest = Math.min(slowest, Math.abs(p.y) + p.sd);
    const turned = lowest !== null && p.y - 2 * p.sd > lowest.y + 2 * lowest.sd;
    const far = Math.abs(p.y) - 2 * p.sd > LOCAL * slowest;
    if (new Set(kept.map((k) => k.x)).size >= 3 && (turned || far)) break;
    kept.push(p);
    if (lowest === null || p.y < lowest.y) lowest = p;
  }
  return kept;
}

function sdOf(i: Interval): number {
  return (i.high - i.low) / 3.29;
}

/** Carries the control's own sd over to y by the slope of an unweighted line. */
function withControlSd(points: LinePoint[], controlSd: number[]): LinePoint[] {
  if (controlSd.every((s) => s === 0) || points.length < 2) return points;
  const rough: ZeroCrossing = zeroCrossing(points);
  const slope = rough.kind === 'failed' ? 0 : rough.slope;
  return points.map((p, i) => ({ ...p, sd: Math.hypot(p.sd, slope * controlSd[i]!) }));
}

/** Adds the shift that the outer half of the points causes: a sign of curvature. */
function widenByCurvature(points: LinePoint[], interval: Interval): Interval {
  const xs = [...new Set(points.map((p) => p.x))].sort((a, b) => a - b);
  if (xs.length < 4) return interval;
  const edge = xs[Math.max(2, Math.ceil(xs.length / 2) - 1)]!;
  const inner = zeroCrossing(points.filter((p) => p.x <= edge));
  if (inner.kind === 'failed') return interval;
  const near = inner.kind === 'crossing' ? inner.interval.value : inner.value;
  const shift = near - interval.value;
  return {
    value: interval.value,
    low: Math.min(interval.low, interval.value + Math.min(0, 2.5 * shift)),
    high: Math.max(interval.high, interval.value + Math.max(0, 2.5 * shift)),
  };
}
