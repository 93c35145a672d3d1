import { nextInside, type Span, spanIndex } from './spans';
import type { LocalDays } from './time';

/** One attendance of a person, or a stretch in which the person is busy elsewhere. */
export type Item = { from: number; to: number; round: string | null; day: number };

/**
 * What one person does over time, with every rule that binds one person: hours, absences and
 * closures (cut out of `free` beforehand), one place at a time, daily maximum, rest.
 *
 * Rest: an attendance on a later local date than another begins at least `restMs` after the other
 * ends. An attendance belongs to the local date on which it begins.
 * Daily maximum: minutes of all attendances, split at local midnight; attendances of one round
 * count each in full. Stretches busy elsewhere count towards both rules.
 */
export class PersonBook {
  private readonly items: Item[] = [];
  private readonly dayUsed: number[];
  private longest = 0;
  /** Minutes attended in this plan, ms. */
  load = 0;

  constructor(
    readonly id: string,
    readonly skills: ReadonlySet<string>,
    readonly free: Span[],
    private readonly days: LocalDays,
    private readonly maxPerDay: number,
    private readonly restMs: number,
  ) {
    this.dayUsed = days.midnights.map(() => 0);
  }

  /** Index of the first item that begins at or after `t`. */
  private firstFrom(t: number): number {
    let low = 0;
    let high = this.items.length;
    while (low < high) {
      const mid = (low + high) >> 1;
      if (this.items[mid]!.from < t) low = mid + 1;
      else high = mid;
    }
    return low;
  }

  private eachDay(from: number, to: number, visit: (day: number, ms: number) => void): void {
    for (let d = Math.max(0, this.days.dayOf(from)); d < this.dayUsed.length; d++) {
      const ms = Math.min(to, this.days.begin(d + 1)) - Math.max(from, this.days.begin(d));
      if (ms > 0) visit(d, ms);
      if (this.days.begin(d + 1) >= to) break;
    }
  }

  private count(from: number, to: number, sign: 1 | -1): void {
    this.eachDay(from, to, (d, ms) => {
      this.dayUsed[d]! += sign * ms;
    });
  }

  add(from: number, to: number, round: string | null, elsewhere = false): void {
    const item = { from, to, round, day: this.days.dayOf(from) };
    this.items.splice(this.firstFrom(from), 0, item);
    this.longest = Math.max(this.longest, to - from);
    this.count(from, to, 1);
    if (!elsewhere) this.load += to - from;
  }

  remove(from: number, to: number, round: string | null): void {
    for (let i = this.firstFrom(from); i < this.items.length; i++) {
      const item = this.items[i]!;
      if (item.from !== from) return;
      if (item.to !== to || item.round !== round) continue;
      this.items.splice(i, 1);
      this.count(from, to, -1);
      this.load -= to - from;
      return;
    }
  }

  /** Whether the person is already in this round at that time. */
  sharesRound(from: number, to: number, round: string | null): boolean {
    if (round === null) return false;
    for (let i = this.firstFrom(to) - 1; i >= 0; i--) {
      const item = this.items[i]!;
      if (item.from <= from - this.longest) return false;
      if (item.to > from && item.round === round) return true;
    }
    return false;
  }

  /** The end of an item that stands in the way of [s, e), or s. */
  private pastOverlap(s: number, e: number, round: string | null): number {
    for (let i = this.firstFrom(e) - 1; i >= 0; i--) {
      const item = this.items[i]!;
      if (item.from <= s - this.longest) break;
      if (item.to > s && !(round !== null && item.round === round)) return item.to;
    }
    return s;
  }

  private pastRest(s: number, e: number): number {
    if (this.restMs === 0) return s;
    const day = this.days.dayOf(s);
    const first = this.firstFrom(s);
    for (let i = first - 1; i >= 0; i--) {
      const item = this.items[i]!;
      if (item.from <= s - this.longest - this.restMs) break;
      if (item.day < day && s - item.to < this.restMs) return item.to + this.restMs;
    }
    for (let i = first; i < this.items.length; i++) {
      const item = this.items[i]!;
      if (item.from - e >= this.restMs) break;
      // Any later moment of the same day is nearer still, so the next day is tried.
      if (item.day > day) return this.days.begin(day + 1);
    }
    return s;
  }

  private pastDailyMaximum(s: number, e: number): number {
    if (this.maxPerDay === Number.POSITIVE_INFINITY) return s;
    let next = s;
    this.eachDay(s, e, (d, ms) => {
      const left = Math.max(0, this.maxPerDay - this.dayUsed[d]!);
      // The moment from which no more than `left` falls on this day.
      if (next === s && ms > left) next = this.days.begin(d + 1) - left;
    });
    return next;
  }

  /** The earliest s in [t, limit] at which the person can attend [s, s + duration), or Infinity. */
  nextFree(t: number, duration: number, round: string | null, limit: number): number {
    let s = t;
    while (s <= limit) {
      const open = nextInside(this.free, s, duration);
      if (open !== s) {
        s = open;
        continue;
      }
      let next = this.pastOverlap(s, s + duration, round);
      if (next === s) next = this.pastRest(s, s + duration);
      if (next === s) next = this.pastDailyMaximum(s, s + duration);
      if (next === s) return s;
      s = next;
    }
    return Number.POSITIVE_INFINITY;
  }

  worksAt(t: number): boolean {
    const i = spanIndex(this.free, t);
    return i >= 0 && this.free[i]!.to > t;
  }
}
