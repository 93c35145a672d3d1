import { DateTime, IANAZone } from 'luxon';
import { EngineError } from '../../contracts/common';

/** Every time inside the lay-out is a whole number of milliseconds since 1970-01-01T00:00Z. */
export const MINUTE = 60_000;
export const HOUR = 60 * MINUTE;
export const DAY = 24 * HOUR;
/** Starts of bookings lie on this grid, counted from `notBefore`. */
export const GRID = 5 * MINUTE;

export function minutesToMs(minutes: number): number {
  return Math.round(minutes * MINUTE);
}

/** ISO 8601 with an offset, to milliseconds since the epoch. */
export function parseInstant(iso: string, at: string): number {
  const ms = Date.parse(iso);
  if (!Number.isFinite(ms)) {
    throw new EngineError('invalid-request', `"${iso}" is no moment in time that exists.`, at);
  }
  return ms;
}

export function parseZone(name: string, at = 'timeZone'): IANAZone {
  const zone = IANAZone.create(name);
  if (!zone.isValid) {
    const text = `"${name}" is no time zone of the IANA database; write one like Europe/Berlin.`;
    throw new EngineError('invalid-request', text, at);
  }
  return zone;
}

/**
 * The instant of a local wall time, by RFC 5545 section 3.3.5: a time that occurs twice means its
 * first occurrence, a time that does not occur is read with the offset in force before the gap.
 *
 * @param wall the wall time written as if it were UTC, ms. May run past the end of a day.
 */
export function wallToInstant(wall: number, zone: IANAZone): number {
  // Offsets change less often than every two days, so these two bracket any single change.
  const before = zone.offset(wall - DAY) * MINUTE;
  const after = zone.offset(wall + DAY) * MINUTE;
  const early = wall - before;
  if (before === after || zone.offset(early) * MINUTE === before) return early;
  const late = wall - after;
  return zone.offset(late) * MINUTE === after ? late : early;
}

/** The wall time of an instant, written as if it were UTC, ms. */
export function instantToWall(instant: number, zone: IANAZone): number {
  return instant + zone.offset(instant) * MINUTE;
}

/** The local calendar date of an instant: its wall midnight written as if it were UTC, ms. */
export function localDate(instant: number, zone: IANAZone): number {
  return Math.floor(instantToWall(instant, zone) / DAY) * DAY;
}

export function toIso(ms: number, zone: IANAZone): string {
  const iso = DateTime.fromMillis(ms, { zone }).toISO({ suppressMilliseconds: true });
  if (iso === null) throw new EngineError('internal', `The instant ${ms} cannot be written.`);
  return iso;
}

function words(ms: number, zone: IANAZone, format: string): string {
  return DateTime.fromMillis(ms, { zone, locale: 'en-GB' }).toFormat(format);
}
export const dayWords = (ms: number, zone: IANAZone) => words(ms, zone, 'ccc d LLL');
export const clockWords = (ms: number, zone: IANAZone) => words(ms, zone, 'HH:mm');
export const momentWords = (ms: number, zone: IANAZone) => words(ms, zone, 'ccc d LLL HH:mm');

/** "3 d 4 h", "45 min", "2 h 30 min": the two largest parts. */
export function durationWords(ms: number): string {
  const total = Math.max(1, Math.round(ms / MINUTE));
  const d = Math.floor(total / 1440);
  const h = Math.floor((total % 1440) / 60);
  const m = total % 60;
  const parts = [d && `${d} d`, h && `${h} h`, m && `${m} min`].filter(Boolean);
  return parts.slice(0, 2).join(' ');
}

/** Local midnights over a stretch of time; answers on which local day an instant falls. */
export class LocalDays {
  /** Instants at which local days begin, rising. */
  readonly midnights: number[] = [];

  constructor(from: number, to: number, zone: IANAZone) {
    const first = localDate(from, zone);
    for (let date = first; ; date += DAY) {
      const midnight = wallToInstant(date, zone);
      this.midnights.push(midnight);
      if (midnight > to) break;
    }
  }

  /** Index of the local day that holds `t`; −1 before the first, the last index at the end. */
  dayOf(t: number): number {
    const all = this.midnights;
    let i = Math.min(all.length - 1, Math.max(-1, Math.floor((t - all[0]!) / DAY)));
    while (i + 1 < all.length && all[i + 1]! <= t) i++;
    while (i >= 0 && all[i]! > t) i--;
    return i;
  }

  /** The instant at which day `i` begins; Infinity past the end. */
  begin(i: number): number {
    return i < 0 ? Number.NEGATIVE_INFINITY : (this.midnights[i] ?? Number.POSITIVE_INFINITY);
  }
}
