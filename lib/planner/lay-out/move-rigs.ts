import { expandHours } from './hours';
import { nameOf, overlaps, readSpan, timeNear } from './move-people';
import type { Conflict, Move } from './move-types';
import { nextInside, type Span } from './spans';
import { DAY, durationWords, MINUTE, momentWords } from './time';

type Stay = Span & { booking: string };

const hull = (spans: readonly Span[]): Span => ({
  from: spans.reduce((t, s) => Math.min(t, s.from), Number.POSITIVE_INFINITY),
  to: spans.reduce((t, s) => Math.max(t, s.to), Number.NEGATIVE_INFINITY),
});

/** From when to when a booking lasts as the calendar stands; the moved session as proposed. */
function extent(move: Move, booking: string): Span | null {
  const own = booking === move.session.booking;
  if (own && move.occupation) return move.occupation;
  const stays = (move.lab.occupations ?? []).filter((o) => o.booking === booking).map(readSpan);
  const sessions = move.lab.sessions
    .filter((s) => s.booking === booking)
    .map((s) => (s.id === move.session.id ? move.span : readSpan(s)));
  const all = [...stays, ...sessions];
  return all.length === 0 ? null : hull(all);
}

/** Stays of other runs on a rig; runs without a stay of their own hold it during their sessions. */
function othersOn(move: Move, rig: string): Stay[] {
  const { occupations = [], sessions } = move.lab;
  const own = move.session.booking;
  const stays = occupations.filter((o) => o.rig === rig && o.booking !== own);
  const known = new Set(occupations.map((o) => o.booking));
  const loose = sessions.filter((s) => s.rig === rig && s.booking !== own && !known.has(s.booking));
  return [...stays, ...loose].map((s) => ({ ...readSpan(s), booking: s.booking }));
}

function heldConflict(move: Move, stay: Span, rig: Move['lab']['rigs'][number]): Conflict[] {
  const others = othersOn(move, rig.id).filter((o) => overlaps(o, stay));
  const moments = [stay.from, ...others.map((o) => Math.max(o.from, stay.from))];
  for (const t of moments.sort((a, b) => a - b)) {
    const there = others.filter((o) => o.from <= t && o.to > t);
    const runs = new Set(there.map((o) => o.booking)).size;
    if (runs < (rig.capacity ?? 1)) continue;
    const until = there.reduce((end, o) => Math.min(end, o.to), Number.POSITIVE_INFINITY);
    const what = runs === 1 ? 'another run' : `${runs} other runs`;
    const from = t > stay.from ? ` from ${timeNear(move, t, move.span.from)}` : '';
    const text = `${nameOf(rig)} holds ${what}${from} until ${timeNear(move, until, move.span.from)}.`;
    return [{ code: 'rig-held', text }];
  }
  return [];
}

function shutConflict(move: Move, stay: Span, rig: Move['lab']['rigs'][number]): Conflict[] {
  if (!rig.open) return [];
  const open = expandHours(rig.open, move.zone, move.anchor, stay.to + DAY, 'rigs.open');
  if (nextInside(open, stay.from, stay.to - stay.from) === stay.from) return [];
  const from = momentWords(stay.from, move.zone);
  const text = `${nameOf(rig)} is not open all the time from ${from} to ${timeNear(move, stay.to, stay.from)}.`;
  return [{ code: 'rig-shut', text }];
}

export function rigConflicts(move: Move): Conflict[] {
  if (move.rig === null) return [];
  const rig = move.lab.rigs.find((r) => r.id === move.rig);
  if (!rig) {
    return [{ code: 'unknown-rig', text: `There is no rig "${move.rig}" in this lab.` }];
  }
  const known = (move.lab.occupations ?? []).some((o) => o.booking === move.session.booking);
  const whole = known || move.occupation ? extent(move, move.session.booking) : null;
  const stay = whole ?? move.span;
  return [...heldConflict(move, stay, rig), ...shutConflict(move, stay, rig)];
}

/** Wash-out gaps between the moved run and those before and after it. */
export function gapConflicts(move: Move): Conflict[] {
  const found: Conflict[] = [];
  const own = move.session.booking;
  for (const gap of move.lab.gaps ?? []) {
    if (gap.before !== own && gap.after !== own) continue;
    const a = extent(move, gap.before);
    const b = extent(move, gap.after);
    if (!a || !b) continue;
    const elapsed = b.from - a.to;
    const which = gap.before === own ? 'the run after it' : 'the run before it';
    if (elapsed < gap.gapMin * MINUTE) {
      const left = elapsed <= 0 ? 'no time' : `only ${durationWords(elapsed)}`;
      const text =
        gap.gapMin > 0
          ? `It leaves ${left} to ${which}; the wash-out takes ${durationWords(gap.gapMin * MINUTE)}.`
          : `It runs into ${which} of the same preparation.`;
      found.push({ code: 'gap-short', text });
    } else if (gap.gapMax !== undefined && elapsed > gap.gapMax * MINUTE) {
      const text = `It leaves ${durationWords(elapsed)} to ${which}; at most ${durationWords(gap.gapMax * MINUTE)} may pass.`;
      found.push({ code: 'gap-long', text });
    }
  }
  return found;
}
