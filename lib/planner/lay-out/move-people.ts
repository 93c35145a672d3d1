import { expandHours } from './hours';
import type { Conflict, Move, MoveLab } from './move-types';
import { nextInside, type Span } from './spans';
import {
  clockWords,
  DAY,
  dayWords,
  durationWords,
  HOUR,
  LocalDays,
  localDate,
  MINUTE,
  momentWords,
} from './time';

type Person = MoveLab['people'][number];
type Other = Span & { round?: string };

export const nameOf = (thing: { id: string; name?: string }) => thing.name ?? thing.id;
export const readSpan = (s: { from: string; to: string }): Span => ({
  from: Date.parse(s.from),
  to: Date.parse(s.to),
});
export const overlaps = (a: Span, b: Span) => a.from < b.to && b.from < a.to;

/** The clock alone while it is the same local day as `near`, else the day as well. */
export function timeNear(move: Move, t: number, near: number): string {
  const same = localDate(t, move.zone) === localDate(near, move.zone);
  return same ? clockWords(t, move.zone) : momentWords(t, move.zone);
}

function hoursOf(move: Move, person: Person, i: number): Span[] {
  return expandHours(person.hours, move.zone, move.anchor, move.span.to + DAY, `people.${i}.hours`);
}

function worksThen(move: Move, person: Person, i: number): boolean {
  const { from, to } = move.span;
  return nextInside(hoursOf(move, person, i), from, to - from) === from;
}

function hoursConflict(move: Move, person: Person, i: number): Conflict[] {
  if (worksThen(move, person, i)) return [];
  const { zone, span } = move;
  const date = localDate(span.from, zone);
  const that = hoursOf(move, person, i).filter((s) => localDate(s.from, zone) === date);
  const day = dayWords(span.from, zone);
  const times = that.map((s) => `${clockWords(s.from, zone)}–${timeNear(move, s.to, s.from)}`);
  const text =
    times.length === 0
      ? `${nameOf(person)} does not work on ${day}.`
      : `${nameOf(person)} works ${times.join(' and ')} on ${day}.`;
  return [{ code: 'outside-hours', text }];
}

function awayConflict(move: Move, person: Person): Conflict[] {
  const away = (person.away ?? []).map(readSpan).find((s) => overlaps(s, move.span));
  if (!away) return [];
  const { zone, span } = move;
  const first = Math.max(away.from, span.from);
  const wholeDay = away.from <= localDateStart(move) && away.to >= localDateStart(move) + 23 * HOUR;
  const day = dayWords(first, zone);
  const text = wholeDay
    ? `${nameOf(person)} is away on ${day}.`
    : `${nameOf(person)} is away on ${day} from ${timeNear(move, away.from, first)} to ${timeNear(move, away.to, first)}.`;
  return [{ code: 'away', text }];
}

function localDateStart(move: Move): number {
  const { from } = move.span;
  return new LocalDays(from, from, move.zone).begin(0);
}

function othersOf(move: Move, person: Person): Other[] {
  return move.lab.sessions
    .filter((s) => s.id !== move.session.id && s.people.includes(person.id))
    .map((s) => ({ ...readSpan(s), round: s.round }));
}

function presenceConflict(move: Move, person: Person, others: readonly Other[]): Conflict[] {
  const { round } = move.session;
  const other = others.find(
    (o) => overlaps(o, move.span) && !(round !== undefined && o.round === round),
  );
  if (!other) return [];
  const until = timeNear(move, other.to, move.span.from);
  return [
    { code: 'double-booked', text: `${nameOf(person)} is at another session until ${until}.` },
  ];
}

function skillConflict(move: Move, person: Person): Conflict[] {
  const missing = (move.session.skills ?? []).filter((s) => !person.skills?.includes(s));
  if (missing.length === 0) return [];
  const skills = missing.map((s) => `*${s}*`).join(' and ');
  return [{ code: 'lacks-skill', text: `${nameOf(person)} is not trained in ${skills}.` }];
}

function dayConflict(move: Move, person: Person, others: readonly Other[]): Conflict[] {
  const most = person.maxMinutesPerDay;
  if (most === undefined) return [];
  const days = new LocalDays(move.span.from, move.span.to, move.zone);
  for (let d = 0; d < days.midnights.length - 1; d++) {
    const inDay = (s: Span) =>
      Math.max(0, Math.min(s.to, days.begin(d + 1)) - Math.max(s.from, days.begin(d)));
    if (inDay(move.span) === 0) continue;
    const total = [move.span, ...others].reduce((sum, s) => sum + inDay(s), 0);
    if (total <= most * MINUTE) continue;
    const day = dayWords(days.begin(d), move.zone);
    const text = `${nameOf(person)} would attend ${durationWords(total)} on ${day}; the most is ${durationWords(most * MINUTE)}.`;
    return [{ code: 'day-full', text }];
  }
  return [];
}

function restConflict(move: Move, person: Person, others: readonly Other[]): Conflict[] {
  const rest = (person.minRestHours ?? 0) * HOUR;
  if (rest === 0) return [];
  const date = (s: Span) => localDate(s.from, move.zone);
  for (const other of others) {
    const [a, b] = date(other) < date(move.span) ? [other, move.span] : [move.span, other];
    if (date(a) === date(b) || b.from - a.to >= rest) continue;
    const text = `${nameOf(person)} would rest only ${durationWords(Math.max(0, b.from - a.to))} before ${momentWords(b.from, move.zone)}; ${durationWords(rest)} are due.`;
    return [{ code: 'rest-short', text }];
  }
  return [];
}

function closureConflict(move: Move): Conflict[] {
  const shut = (move.lab.closed ?? []).map(readSpan).find((s) => overlaps(s, move.span));
  if (!shut) return [];
  const first = Math.max(shut.from, move.span.from);
  const text = `The lab is closed on ${dayWords(first, move.zone)}, until ${momentWords(shut.to, move.zone)}.`;
  return [{ code: 'closed', text }];
}

/** What stands against the people of a moved session. */
export function peopleConflicts(move: Move): Conflict[] {
  const { lab } = move;
  const found = closureConflict(move);
  const somebody = lab.people.some(
    (p, i) => worksThen(move, p, i) && awayConflict(move, p).length === 0,
  );
  if (!somebody) {
    const when = `${momentWords(move.span.from, move.zone)}–${timeNear(move, move.span.to, move.span.from)}`;
    found.push({ code: 'nobody-works', text: `Nobody works then (${when}).` });
  }
  for (const id of move.people) {
    const i = lab.people.findIndex((p) => p.id === id);
    const person = lab.people[i];
    if (!person) {
      found.push({ code: 'unknown-person', text: `There is no person "${id}" in this lab.` });
      continue;
    }
    const others = othersOf(move, person);
    const away = awayConflict(move, person);
    found.push(...away, ...(away.length === 0 ? hoursConflict(move, person, i) : []));
    found.push(...presenceConflict(move, person, others), ...skillConflict(move, person));
    found.push(...dayConflict(move, person, others), ...restConflict(move, person, others));
  }
  return found;
}
