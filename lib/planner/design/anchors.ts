import type { DesignedLevel, Note } from '@/lib/contracts';
import type { Settable } from './settable';

export type Placed = { dose: number; purpose: DesignedLevel['purpose'] };

/** Significant digits enough to read a dose, without trailing noise. */
export const shown = (x: number) => String(Number(x.toPrecision(6)));

export type AnchorSide = {
  /** The end of the range that the first anchor belongs to, and the level next to it. */
  end: number;
  next: number;
  count: number;
  purpose: 'baseline' | 'far side';
};

/** Least distance at which two doses count as different. */
const distinct = (set: Settable) => 1e-9 * Math.max(1e-300, set.high - set.low);

/** Evenly from the end towards the next level, that level excluded; fewer where room is short. */
function evenly(first: number, side: AnchorSide, room: number, apart: number): number[] {
  const fit = apart > 0 ? Math.floor((room / apart) * (1 + 1e-9)) : side.count;
  const n = Math.min(side.count, fit);
  return Array.from({ length: n }, (_, i) => first + ((side.next - first) * i) / n);
}

/** Nearest free grid doses to the wished ones, each `apart` from the others and from the level. */
function onGrid(
  wished: number[],
  side: AnchorSide,
  set: Settable,
  apart: number,
  also: number[] = [],
): number[] {
  const taken = [side.next, ...also];
  const chosen: number[] = [];
  const [low, high] = [Math.min(side.end, side.next), Math.max(side.end, side.next)];
  const between = set.grid!.filter((d) => d >= low && d <= high);
  for (const wish of wished) {
    const free = between.filter((d) =>
      taken.every((t) => d !== t && Math.abs(d - t) >= apart * (1 - 1e-9)),
    );
    if (free.length === 0) break;
    const dose = free.reduce((a, b) => (Math.abs(b - wish) < Math.abs(a - wish) ? b : a));
    taken.push(dose);
    chosen.push(dose);
  }
  return chosen;
}

/**
 * Anchors of one side: the first at the end of the range or as near as can be set, the others
 * evenly towards the nearest level, all at least `apart` from one another. Notes what is missing.
 */
export function anchorsOf(
  side: AnchorSide,
  set: Settable,
  apart: number,
): { placed: Placed[]; notes: Note[] } {
  if (side.count === 0) return { placed: [], notes: [] };
  const first = Math.min(set.high, Math.max(set.low, side.end));
  const room = Math.abs(side.next - first);
  const free = room > distinct(set);
  const wished = free ? evenly(first, side, room, apart) : [];
  const doses = set.grid ? onGrid(wished, side, set, apart) : wished;
  const notes: Note[] = [];
  const name = side.purpose === 'baseline' ? 'baseline' : 'far-side';
  if (doses.length < side.count) {
    const text = `${doses.length} of ${side.count} ${name} levels fit between ${shown(side.end)} and the level at ${shown(side.next)}.`;
    notes.push({ code: 'anchor-unreachable', text });
  }
  const nearest = doses[0];
  if (nearest !== undefined && Math.abs(nearest - side.end) > distinct(set)) {
    const text = `The first ${name} level stands at ${shown(nearest)}: the limits allow nothing nearer to the end of the range, ${shown(side.end)}.`;
    notes.push({ code: 'anchor-unreachable', text });
  }
  return { placed: doses.map((dose) => ({ dose, purpose: side.purpose })), notes };
}

/** Anchors that two edges share: evenly spread between the last level of one and the first of the next. */
export function anchorsBetween(
  gap: readonly [number, number],
  side: Pick<AnchorSide, 'count' | 'purpose'>,
  set: Settable,
  apart: number,
): { placed: Placed[]; notes: Note[] } {
  const [from, to] = gap;
  const room = to - from;
  const fit = apart > 0 ? Math.floor((room / apart) * (1 + 1e-9)) - 1 : side.count;
  const n = room > distinct(set) ? Math.max(0, Math.min(side.count, fit)) : 0;
  const wished = Array.from({ length: n }, (_, i) => from + (room * (i + 1)) / (n + 1));
  const inner = { ...side, end: from, next: to };
  const doses = set.grid ? onGrid(wished, inner, set, apart, [from]) : wished;
  const notes: Note[] = [];
  if (doses.length < side.count) {
    const name = side.purpose === 'baseline' ? 'baseline' : 'far-side';
    const text = `${doses.length} of ${side.count} ${name} levels fit between the edges, from ${shown(from)} to ${shown(to)}.`;
    notes.push({ code: 'anchor-unreachable', text });
  }
  return { placed: doses.map((dose) => ({ dose, purpose: side.purpose })), notes };
}
