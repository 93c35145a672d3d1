import type { DateTime } from 'luxon';
import { type Instant, zoned } from '@/lib/format';

export type DayTick = { key: number; share: number; kind: 'three' | 'hour' | 'half'; text: string };
export type Stretch = { from: number; to: number };

export type DayScale = {
  /** share of the day gone by at an instant; below 0 and above 1 on other days */
  share: (at: Instant) => number;
  ticks: DayTick[];
};

/**
 * The local day around `now` as a scale from 0 to 1, with half-hour ticks. A day of 23 or 25 hours
 * has as many: shares are elapsed time, numerals the hours that the clock shows.
 */
export function dayScale(now: Instant, zone: string): DayScale {
  const start = zoned(now, zone).startOf('day');
  const end = start.plus({ days: 1 });
  const length = end.toMillis() - start.toMillis();
  const share = (at: Instant) => (zoned(at, zone).toMillis() - start.toMillis()) / length;
  const halves = Math.round(length / 1_800_000);
  const ticks = Array.from({ length: halves + 1 }, (_, i): DayTick => {
    const at = start.plus({ minutes: 30 * i });
    return { key: i, share: i / halves, kind: kindOf(at), text: hourText(at, i === halves) };
  });
  return { share, ticks };
}

function kindOf(at: DateTime): DayTick['kind'] {
  if (at.minute !== 0) return 'half';
  return at.hour % 3 === 0 ? 'three' : 'hour';
}

const hourText = (at: DateTime, last: boolean) => (last ? '24' : String(at.hour).padStart(2, '0'));

/** What of 0 … 1 the stretches leave uncovered: the closed hours between the open ones. */
export function gaps(stretches: readonly Stretch[]): Stretch[] {
  const sorted = stretches
    .map((s) => ({ from: Math.max(0, s.from), to: Math.min(1, s.to) }))
    .filter((s) => s.to > s.from)
    .sort((a, b) => a.from - b.from);
  const closed: Stretch[] = [];
  let at = 0;
  for (const s of sorted) {
    if (s.from > at) closed.push({ from: at, to: s.from });
    at = Math.max(at, s.to);
  }
  if (at < 1) closed.push({ from: at, to: 1 });
  return closed;
}
