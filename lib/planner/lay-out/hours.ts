import type { IANAZone } from 'luxon';
import { type Options, RRule } from 'rrule';
import { EngineError } from '../../contracts/common';
import type { Hours } from '../../contracts/lay-out';
import { mergeSpans, type Span } from './spans';
import {
  DAY,
  instantToWall,
  localDate,
  MINUTE,
  parseInstant,
  parseZone,
  toIso,
  wallToInstant,
} from './time';

const CALENDAR_FREQUENCIES = new Set<number | undefined>([
  RRule.DAILY,
  RRule.WEEKLY,
  RRule.MONTHLY,
  RRule.YEARLY,
]);
function refuse(text: string, at: string): never {
  throw new EngineError('invalid-request', text, at);
}

/**
 * Reads a recurrence of whole days (RFC 5545 section 3.3.10). Its clock times are those of `from`
 * and `to`, its first date is set by the caller, so DTSTART, TZID and parts below a day are refused.
 */
export function parseRule(rrule: string, at: string): Partial<Options> {
  const text = rrule.trim().replace(/^RRULE:/i, '');
  if (/DTSTART|TZID|[\n\r]/i.test(text)) {
    refuse('Leave DTSTART and TZID out: a recurrence starts with the plan, in the lab zone.', at);
  }
  if (!/(^|;)FREQ=/i.test(text)) {
    refuse(`"${rrule}" is no recurrence; write one like FREQ=WEEKLY;BYDAY=MO,TU,WE,TH,FR.`, at);
  }
  if (/(^|;)BY(HOUR|MINUTE|SECOND)=/i.test(text)) {
    refuse('Clock times belong in "from" and "to", not in the recurrence.', at);
  }
  const options = tryRead(() => RRule.parseString(text), rrule, at);
  if (!CALENDAR_FREQUENCIES.has(options.freq)) {
    refuse('Working hours repeat by day, week, month or year; choose one of these for FREQ.', at);
  }
  checkCounts(options, text, at);
  tryRead(() => new RRule({ ...options, dtstart: new Date(0) }), rrule, at);
  return options;
}

function tryRead<T>(read: () => T, rrule: string, at: string): T {
  try {
    return read();
  } catch (cause) {
    const why = cause instanceof Error ? cause.message : 'it cannot be read';
    return refuse(`"${rrule}" is no recurrence of RFC 5545 (${why}).`, at);
  }
}

function checkCounts(options: Partial<Options>, text: string, at: string): void {
  const whole = (n: number | null | undefined) =>
    n === undefined || n === null || (Number.isInteger(n) && n >= 1);
  if (!whole(options.interval) || !whole(options.count)) {
    refuse('INTERVAL and COUNT must be whole numbers from 1.', at);
  }
  if (/COUNT=/i.test(text) && /UNTIL=/i.test(text)) {
    refuse('COUNT and UNTIL never stand together (RFC 5545 section 3.3.10).', at);
  }
}

/** UNTIL as a wall time written as UTC: a bare date means the whole of that day. */
export function untilWall(rrule: string, options: Partial<Options>, zone: IANAZone): Date | null {
  const until = options.until;
  if (!until) return null;
  const written = /UNTIL=([0-9TZ]+)/i.exec(rrule)?.[1] ?? '';
  if (!written.includes('T')) return new Date(until.getTime() + DAY - 1);
  if (written.toUpperCase().endsWith('Z')) return new Date(instantToWall(until.getTime(), zone));
  return until;
}

function clockToMs(clock: string): number {
  const [h, m] = clock.split(':');
  return (Number(h) * 60 + Number(m)) * MINUTE;
}

class PastHorizon extends Error {}

/**
 * A rule that never matches again (30 February) would be searched up to the year 9999, many seconds
 * long. The search reads `bymonth` once for each day it looks at, so counting the reads ends it
 * beyond the horizon, when all occurrences within are found.
 */
function boundSearch(rule: RRule, days: number): void {
  const months = rule.options.bymonth;
  let looked = 0;
  Object.defineProperty(rule.options, 'bymonth', {
    get: () => {
      if (looked++ > days) throw new PastHorizon();
      return months;
    },
  });
}

/** The local dates (wall midnights written as UTC, ms) of a recurrence from `first` to `last`. */
function occurrenceDates(
  hours: Hours,
  zone: IANAZone,
  first: number,
  last: number,
  at: string,
): number[] {
  const options = parseRule(hours.rrule, at);
  const begin = first + clockToMs(hours.from);
  const rule = new RRule({
    ...options,
    dtstart: new Date(begin),
    until: untilWall(hours.rrule, options, zone),
  });
  const end = new Date(last + DAY - 1);
  const dates: number[] = [];
  const collect = (date: Date) => {
    dates.push(Math.floor(date.getTime() / DAY) * DAY);
    return true;
  };
  boundSearch(rule, 2 * ((last - first) / DAY) + 2000);
  try {
    rule.between(new Date(begin), end, true, collect);
  } catch (cause) {
    if (!(cause instanceof PastHorizon)) throw cause;
  }
  return dates;
}

/**
 * The stretches in which somebody works or a rig is open.
 *
 * @param anchor the recurrence starts on the local date of this instant, ms
 * @param until nothing that begins after this instant is needed, ms
 * @returns merged spans, ms; `to` ≤ `from` ends on the next local date
 */
export function expandHours(
  hours: readonly Hours[],
  zone: IANAZone,
  anchor: number,
  until: number,
  at = 'hours',
): Span[] {
  const spans: Span[] = [];
  const first = localDate(anchor, zone);
  const last = localDate(until, zone);
  hours.forEach((h, i) => {
    const from = clockToMs(h.from);
    const to = clockToMs(h.to);
    const end = to > from ? to : to + DAY;
    for (const date of occurrenceDates(h, zone, first, last, `${at}.${i}.rrule`)) {
      const span = {
        from: wallToInstant(date + from, zone),
        to: wallToInstant(date + end, zone),
      };
      if (span.to > span.from) spans.push(span);
    }
  });
  return mergeSpans(spans);
}

/**
 * The open stretches between two instants, for drawing a day rule or a calendar.
 *
 * @param anchorIso where recurrences start (an INTERVAL or COUNT depends on it); by default the day
 *   before `fromIso`, so that a night that began on the eve shows
 */
export function openIntervals(
  hours: readonly Hours[],
  timeZone: string,
  fromIso: string,
  toIsoText: string,
  anchorIso?: string,
): { from: string; to: string }[] {
  const zone = parseZone(timeZone);
  const from = parseInstant(fromIso, 'from');
  const to = parseInstant(toIsoText, 'to');
  const anchor = anchorIso === undefined ? from - DAY : parseInstant(anchorIso, 'anchor');
  return expandHours(hours, zone, anchor, to)
    .map((s) => ({ from: Math.max(s.from, from), to: Math.min(s.to, to) }))
    .filter((s) => s.to > s.from)
    .map((s) => ({ from: toIso(s.from, zone), to: toIso(s.to, zone) }));
}
