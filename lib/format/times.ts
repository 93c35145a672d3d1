import { DateTime } from 'luxon';

/** An instant: ISO 8601 with offset, a Date, or milliseconds since 1970 UTC. */
export type Instant = string | number | Date;

/** The instant in the lab's IANA zone, English names. An unreadable instant or zone throws. */
export function zoned(at: Instant, zone: string): DateTime {
  const options = { zone, locale: 'en-GB' };
  const time =
    typeof at === 'number'
      ? DateTime.fromMillis(at, options)
      : typeof at === 'string'
        ? DateTime.fromISO(at, options)
        : DateTime.fromJSDate(at, options);
  if (!time.isValid) {
    throw new RangeError(`unreadable time ${String(at)} in zone ${zone}: ${time.invalidReason}`);
  }
  return time;
}

/** "Tue 1 December" */
export const dayText = (at: Instant, zone: string): string =>
  zoned(at, zone).toFormat('ccc d LLLL');

/** "1 December 2026" */
export const dateText = (at: Instant, zone: string): string =>
  zoned(at, zone).toFormat('d LLLL yyyy');

/** "14:32" */
export const clockText = (at: Instant, zone: string): string => zoned(at, zone).toFormat('HH:mm');

/** "Tue 1 Dec, 14:32" */
export const dayClockText = (at: Instant, zone: string): string =>
  zoned(at, zone).toFormat('ccc d LLL, HH:mm');

/** "1 Dec 2026, 14:32" */
export const stampText = (at: Instant, zone: string): string =>
  zoned(at, zone).toFormat('d LLL yyyy, HH:mm');

/** "14:10–14:40", or with the day of the end when it is another day. */
export function spanText(from: Instant, to: Instant, zone: string): string {
  const start = zoned(from, zone);
  const end = zoned(to, zone);
  const sameDay = start.hasSame(end, 'day');
  return sameDay
    ? `${start.toFormat('HH:mm')}\u2013${end.toFormat('HH:mm')}`
    : `${start.toFormat('HH:mm')} to ${end.toFormat('ccc d LLL, HH:mm')}`;
}

/** The offset in force at that instant: "UTC+1", "UTC−3:30", "UTC". */
export function offsetText(at: Instant, zone: string): string {
  const minutes = zoned(at, zone).offset;
  if (minutes === 0) return 'UTC';
  const size = Math.abs(minutes);
  const rest = size % 60;
  const hours = `${Math.floor(size / 60)}${rest ? `:${String(rest).padStart(2, '0')}` : ''}`;
  return `UTC${minutes < 0 ? '\u2212' : '+'}${hours}`;
}

/** The place that the zone is named for: "Europe/Berlin" → "Berlin". */
export function placeOf(zone: string): string {
  return (zone.split('/').pop() ?? zone).replaceAll('_', ' ');
}

/** "Berlin, UTC+1" */
export const zoneText = (at: Instant, zone: string): string =>
  `${placeOf(zone)}, ${offsetText(at, zone)}`;

/** Share of the local day gone by, 0 … 1; days of 23 and 25 hours count by their own length. */
export function shareOfDay(at: Instant, zone: string): number {
  const time = zoned(at, zone);
  const start = time.startOf('day');
  const length = start.plus({ days: 1 }).diff(start).toMillis();
  return time.diff(start).toMillis() / length;
}
