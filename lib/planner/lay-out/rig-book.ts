import { nextInside, type Span } from './spans';
import { DAY } from './time';

/** Idle longer than this is all the same, ms: a rig never used is no looser a fit. */
const LONG_IDLE = 30 * DAY;

/** What one rig holds over time, as a step function of units in use. */
export class RigBook {
  private readonly times: number[] = [Number.NEGATIVE_INFINITY];
  private readonly used: number[] = [0];

  /** @param open merged stretches in which the rig may be occupied; null: always */
  constructor(
    readonly id: string,
    readonly capacity: number,
    readonly open: Span[] | null,
  ) {}

  private indexAt(t: number): number {
    let low = 0;
    let high = this.times.length;
    while (low < high) {
      const mid = (low + high) >> 1;
      if (this.times[mid]! <= t) low = mid + 1;
      else high = mid;
    }
    return low - 1;
  }

  private split(t: number): number {
    const i = this.indexAt(t);
    if (this.times[i] === t) return i;
    this.times.splice(i + 1, 0, t);
    this.used.splice(i + 1, 0, this.used[i]!);
    return i + 1;
  }

  /** Occupies one unit (`units` = 1) or gives one back (−1). */
  change(from: number, to: number, units: 1 | -1): void {
    if (!(to > from)) return;
    const first = this.split(from);
    const last = this.split(to);
    for (let i = first; i < last; i++) this.used[i]! += units;
    for (const i of [last, first]) {
      if (i > 0 && this.used[i] === this.used[i - 1]) {
        this.times.splice(i, 1);
        this.used.splice(i, 1);
      }
    }
  }

  private nextFreeUnit(t: number, duration: number): number {
    let start = t;
    for (let i = this.indexAt(t); i < this.times.length; i++) {
      if (this.times[i]! >= start + duration) break;
      if (this.used[i]! >= this.capacity) start = this.times[i + 1] ?? Number.POSITIVE_INFINITY;
    }
    return start;
  }

  /** The earliest s ≥ t at which one unit is free and the rig open over all of [s, s + duration). */
  nextFree(t: number, duration: number): number {
    let s = t;
    while (Number.isFinite(s)) {
      const unit = this.nextFreeUnit(s, duration);
      const open = this.open ? nextInside(this.open, unit, duration) : unit;
      if (open === s) return s;
      s = open;
    }
    return s;
  }

  /** How long the unit has stood idle before `t`, ms: small when the booking fits snugly. */
  idleBefore(t: number): number {
    const i = this.indexAt(t);
    return this.used[i]! > 0 ? 0 : Math.min(LONG_IDLE, t - this.times[i]!);
  }
}
