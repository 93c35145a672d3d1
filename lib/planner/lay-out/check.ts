import { RRule } from 'rrule';
import type { Hours, LayOutAnswer, LayOutRequest, Placement } from '../../contracts/lay-out';

export { conflictsOfMove } from './move';

const MINUTE = 60_000;
const DAY = 1440 * MINUTE;
/** Half a second: longer than any rounding of written times. */
const SLACK = 500;

type Cell = { from: number; to: number };
type Done = Cell & { person: string; booking: string; round?: string; visit: number };

/** Offset of a zone by the runtime's own calendar, ms: shares nothing with the lay-out's hours. */
function offsetAt(format: Intl.DateTimeFormat, t: number): number {
  const parts: Record<string, number> = {};
  for (const p of format.formatToParts(t)) parts[p.type] = Number(p.value);
  const wall = Date.UTC(
    parts.year!,
    parts.month! - 1,
    parts.day!,
    parts.hour!,
    parts.minute!,
    parts.second!,
  );
  return wall - Math.floor(t / 1000) * 1000;
}

function zoneFormat(timeZone: string): Intl.DateTimeFormat {
  return new Intl.DateTimeFormat('en-US', {
    timeZone,
    hourCycle: 'h23',
    year: 'numeric',
    month: 'numeric',
    day: 'numeric',
    hour: 'numeric',
    minute: 'numeric',
    second: 'numeric',
  });
}

/** Tries every offset a quarter of an hour apart; the earliest that fits is the first occurrence. */
function instantOf(format: Intl.DateTimeFormat, wall: number): number {
  for (let offset = 14 * 60; offset >= -12 * 60; offset -= 15) {
    const t = wall - offset * MINUTE;
    if (offsetAt(format, t) === offset * MINUTE) return t;
  }
  return wall - offsetAt(format, wall - 15 * 60 * MINUTE);
}

function dateOf(format: Intl.DateTimeFormat, t: number): number {
  return Math.floor((t + offsetAt(format, t)) / DAY) * DAY;
}

function occurrences(hours: Hours, request: LayOutRequest, format: Intl.DateTimeFormat): Cell[] {
  const first = dateOf(format, Date.parse(request.notBefore));
  const last = dateOf(format, Date.parse(request.notAfter));
  const clock = (text: string) => (Number(text.slice(0, 2)) * 60 + Number(text.slice(3))) * MINUTE;
  const rule = new RRule({ ...RRule.parseString(hours.rrule), dtstart: new Date(first) });
  const overnight = hours.to <= hours.from ? DAY : 0;
  return rule.between(new Date(first - 1), new Date(last + DAY - 1), true).map((d) => {
    const date = Math.floor(d.getTime() / DAY) * DAY;
    return {
      from: instantOf(format, date + clock(hours.from)),
      to: instantOf(format, date + clock(hours.to) + overnight),
    };
  });
}

/** Whether [from, to) is covered by the cells, walked piece by piece. */
function covered(cells: readonly Cell[], from: number, to: number): boolean {
  let t = from;
  while (t < to) {
    const at = t;
    const reach = Math.max(t, ...cells.filter((c) => c.from <= at && c.to > at).map((c) => c.to));
    if (reach === t) return false;
    t = reach;
  }
  return true;
}

const readCells = (cells: readonly { from: string; to: string }[] | undefined): Cell[] =>
  (cells ?? []).map((c) => ({ from: Date.parse(c.from), to: Date.parse(c.to) }));
const overlap = (a: Cell, b: Cell) => Math.min(a.to, b.to) - Math.max(a.from, b.from);

function checkPlacement(request: LayOutRequest, p: Placement, done: Done[]): string[] {
  const found: string[] = [];
  const booking = request.bookings.find((b) => b.id === p.booking);
  if (!booking) return [`${p.booking}: no such booking`];
  const start = Date.parse(p.start);
  const steps = (start - Date.parse(request.notBefore)) / (5 * MINUTE);
  if (steps < 0 || Math.abs(steps - Math.round(steps)) > 1e-6) {
    found.push(`${p.booking}: starts off the grid`);
  }
  if (!booking.rigs.includes(p.rig)) found.push(`${p.booking}: stands on a rig not asked for`);
  const wanted = booking.attended.flatMap((a, visit) => Array(a.people).fill({ a, visit }));
  if (wanted.length !== p.attendance.length) {
    found.push(`${p.booking}: ${p.attendance.length} attendances instead of ${wanted.length}`);
    return found;
  }
  let end = start + booking.minutes * MINUTE;
  p.attendance.forEach((at, i) => {
    const { a, visit } = wanted[i]!;
    const from = Date.parse(at.from);
    const to = Date.parse(at.to);
    const early = start + a.at * MINUTE;
    if (from < early - SLACK || from > early + a.late * MINUTE + SLACK) {
      found.push(`${p.booking}: visit ${visit} outside its window`);
    }
    if (Math.abs(to - from - a.minutes * MINUTE) > SLACK) {
      found.push(`${p.booking}: visit ${visit} of the wrong length`);
    }
    end = Math.max(end, to);
    const mates = done.filter((d) => d.booking === p.booking && d.visit === visit);
    if (mates.some((d) => d.person === at.person)) {
      found.push(`${p.booking}: visit ${visit} counts one person twice`);
    }
    if (mates.some((d) => d.from !== from)) found.push(`${p.booking}: visit ${visit} not together`);
    done.push({ person: at.person, booking: p.booking, round: a.round, visit, from, to });
  });
  if (Math.abs(Date.parse(p.end) - end) > SLACK) found.push(`${p.booking}: wrong end`);
  if (end > Date.parse(request.notAfter) + SLACK) found.push(`${p.booking}: ends after notAfter`);
  return found;
}

function checkTies(request: LayOutRequest, answer: LayOutAnswer): string[] {
  const found: string[] = [];
  const byId = new Map(answer.placements.map((p) => [p.booking, p]));
  for (const b of request.bookings) {
    const p = byId.get(b.id);
    const listed = answer.unplaced.filter((u) => u.booking === b.id).length;
    const placed = answer.placements.filter((x) => x.booking === b.id).length;
    if (listed + placed !== 1) found.push(`${b.id}: neither placed nor unplaced exactly once`);
    if (!p) continue;
    const twin = b.sameRigAs === undefined ? undefined : byId.get(b.sameRigAs);
    if (twin && twin.rig !== p.rig) found.push(`${b.id}: not on the rig of ${b.sameRigAs}`);
    for (const a of b.after ?? []) {
      const before = byId.get(a.id);
      if (!before) {
        found.push(`${b.id}: placed though ${a.id} is not`);
        continue;
      }
      const gap = Date.parse(p.start) - Date.parse(before.end);
      if (gap < a.gapMin * MINUTE - SLACK) found.push(`${b.id}: too soon after ${a.id}`);
      if (a.gapMax !== undefined && gap > a.gapMax * MINUTE + SLACK) {
        found.push(`${b.id}: too late after ${a.id}`);
      }
    }
  }
  return found;
}

function checkRigs(request: LayOutRequest, answer: LayOutAnswer, format: Intl.DateTimeFormat) {
  const found: string[] = [];
  for (const rig of request.rigs) {
    const held = answer.placements
      .filter((p) => p.rig === rig.id)
      .map((p) => ({ from: Date.parse(p.start), to: Date.parse(p.end), id: p.booking }));
    const lost = readCells(request.busy?.filter((b) => b.rig === rig.id));
    // Use can only rise where a stay or a busy stretch begins.
    for (const t of [...held, ...lost].map((c) => c.from)) {
      const units = held.filter((c) => c.from <= t && c.to > t);
      const gone = lost.filter((c) => c.from <= t && c.to > t);
      if (units.length > 0 && units.length + gone.length > rig.capacity) {
        found.push(`${rig.id}: ${units.map((u) => u.id).join(', ')} exceed its capacity`);
      }
    }
    if (!rig.open) continue;
    const open = rig.open.flatMap((h) => occurrences(h, request, format));
    for (const c of held) {
      if (!covered(open, c.from, c.to)) found.push(`${rig.id}: holds ${c.id} while shut`);
    }
  }
  return found;
}

function checkDays(
  person: LayOutRequest['people'][number],
  mine: readonly Cell[],
  elsewhere: readonly Cell[],
  format: Intl.DateTimeFormat,
): string[] {
  const found: string[] = [];
  const all = [...mine, ...elsewhere];
  const dates = new Set(mine.flatMap((c) => [dateOf(format, c.from), dateOf(format, c.to - 1)]));
  for (const date of dates) {
    const day = { from: instantOf(format, date), to: instantOf(format, date + DAY) };
    const minutes = all.reduce((sum, c) => sum + Math.max(0, overlap(c, day)), 0) / MINUTE;
    if (person.maxMinutesPerDay !== undefined && minutes > person.maxMinutesPerDay + 1e-3) {
      found.push(`${person.id}: ${minutes} minutes on one day`);
    }
  }
  const rest = (person.minRestHours ?? 0) * 60 * MINUTE;
  const planned = new Set(mine);
  const began = new Map(all.map((c) => [c, dateOf(format, c.from)]));
  for (const a of all) {
    for (const b of all) {
      if (!planned.has(a) && !planned.has(b)) continue;
      const nextDay = began.get(a)! < began.get(b)!;
      if (rest > 0 && nextDay && b.from - a.to < rest - SLACK) {
        found.push(`${person.id}: rests only ${(b.from - a.to) / MINUTE} minutes`);
      }
    }
  }
  return found;
}

function checkPeople(
  request: LayOutRequest,
  done: readonly Done[],
  format: Intl.DateTimeFormat,
): string[] {
  const found: string[] = [];
  for (const d of done) {
    const person = request.people.find((p) => p.id === d.person);
    const booking = request.bookings.find((b) => b.id === d.booking);
    if (!person) found.push(`${d.booking}: ${d.person} is nobody here`);
    else if (booking?.skills?.some((s) => !person.skills?.includes(s))) {
      found.push(`${d.booking}: ${d.person} lacks a skill`);
    }
  }
  for (const person of request.people) {
    const mine = done.filter((d) => d.person === person.id);
    const works = person.hours.flatMap((h) => occurrences(h, request, format));
    const elsewhere = readCells(request.busy?.filter((b) => b.person === person.id));
    const gone = [...readCells(person.away), ...readCells(request.closed), ...elsewhere];
    mine.forEach((d, i) => {
      if (!covered(works, d.from, d.to)) found.push(`${d.booking}: ${person.id} is off duty`);
      if (gone.some((c) => overlap(c, d) > 0))
        found.push(`${d.booking}: ${person.id} is not there`);
      for (const e of mine.slice(i + 1)) {
        const together = d.round !== undefined && d.round === e.round;
        if (overlap(d, e) > 0 && !together) {
          found.push(`${person.id}: at ${d.booking} and ${e.booking} at once`);
        }
      }
    });
    found.push(...checkDays(person, mine, elsewhere, format));
  }
  return found;
}

function checkCost(request: LayOutRequest, answer: LayOutAnswer, done: readonly Done[]): string[] {
  const found: string[] = [];
  const zero = Date.parse(request.notBefore);
  const ends = answer.placements.map((p) => Date.parse(p.end));
  const weighted = answer.placements.reduce((sum, p, i) => {
    const weight = request.bookings.find((b) => b.id === p.booking)?.weight ?? 1;
    return sum + (weight * (ends[i]! - zero)) / MINUTE;
  }, 0);
  const loads = request.people.map((p) =>
    done.filter((d) => d.person === p.id).reduce((sum, d) => sum + (d.to - d.from) / MINUTE, 0),
  );
  const n = Math.max(1, loads.length);
  const mean = loads.reduce((a, b) => a + b, 0) / n;
  const variance = loads.reduce((a, b) => a + (b - mean) ** 2, 0) / n;
  [request.bookings.length - answer.placements.length, weighted, variance].forEach((value, i) => {
    const said = answer.cost[i] ?? Number.NaN;
    if (!(Math.abs(said - value) <= 1e-3 * (1 + Math.abs(value)))) {
      found.push(`cost[${i}] is ${said}, should be ${value}`);
    }
  });
  const finish = answer.finish === null ? null : Date.parse(answer.finish);
  const latest = ends.length === 0 ? null : Math.max(...ends);
  if (finish !== latest) found.push('finish is not the latest end');
  return found;
}

/**
 * Every rule of the lay-out that an answer breaks, in words; empty when it keeps them all. Written
 * by brute force from the contract and sharing no code with the constructor, so that each can
 * convict the other.
 */
export function checkLayOut(request: LayOutRequest, answer: LayOutAnswer): string[] {
  const format = zoneFormat(request.timeZone);
  const done: Done[] = [];
  const found = answer.placements.flatMap((p) => checkPlacement(request, p, done));
  return [
    ...found,
    ...checkTies(request, answer),
    ...checkRigs(request, answer, format),
    ...checkPeople(request, done, format),
    ...checkCost(request, answer, done),
  ];
}
