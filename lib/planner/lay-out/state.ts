import type { Job, Problem } from './problem';

export type Attendance = { visit: number; people: number[]; from: number; to: number };
/** Where a booking stands: instants in ms, indices of rig and people. */
export type Placed = { start: number; end: number; rig: number; attendance: Attendance[] };
/** Compared part by part: unplaced, weighted minutes to the end, variance of load. */
export type Cost = [number, number, number];

type Step = { job: number; before: Placed | null };

/** The plan as it grows and changes; every change can be taken back to a mark. */
export class State {
  readonly placed: (Placed | null)[];
  private readonly log: Step[] = [];
  /** Looks at people's calendars so far: the measure of work, the same on every machine. */
  work = 0;
  /** Starts tried in vain because visits of one booking got in each other's way. */
  misses = 0;
  /** Bookings that have no place even in an empty calendar; never tried again. */
  readonly hopeless = new Set<number>();

  constructor(readonly problem: Problem) {
    this.placed = problem.jobs.map(() => null);
  }

  private enter(job: Job, at: Placed, sign: 1 | -1): void {
    this.problem.rigs[at.rig]!.change(at.start, at.end, sign);
    for (const a of at.attendance) {
      const round = roundOf(job, a.visit);
      for (const p of a.people) {
        const book = this.problem.people[p]!;
        if (sign === 1) book.add(a.from, a.to, round);
        else book.remove(a.from, a.to, round);
      }
    }
  }

  private put(index: number, to: Placed | null): void {
    const job = this.problem.jobs[index]!;
    const from = this.placed[index]!;
    if (from) this.enter(job, from, -1);
    if (to) this.enter(job, to, 1);
    this.placed[index] = to;
  }

  set(index: number, to: Placed | null): void {
    const before = this.placed[index] ?? null;
    if (before === to) return;
    this.log.push({ job: index, before });
    this.put(index, to);
  }

  mark(): number {
    return this.log.length;
  }

  rollback(mark: number): void {
    while (this.log.length > mark) {
      const step = this.log.pop()!;
      this.put(step.job, step.before);
    }
  }

  restore(placed: readonly (Placed | null)[]): void {
    this.placed.forEach((_, i) => {
      if (this.placed[i] !== placed[i]) this.set(i, null);
    });
    placed.forEach((p, i) => {
      this.set(i, p);
    });
  }

  cost(): Cost {
    const { jobs, people, notBefore } = this.problem;
    let unplaced = 0;
    let weighted = 0;
    jobs.forEach((job, i) => {
      const at = this.placed[i];
      if (!at) unplaced++;
      else weighted += (job.weight * (at.end - notBefore)) / 60_000;
    });
    const loads = people.map((p) => p.load / 60_000);
    const mean = loads.reduce((a, b) => a + b, 0) / Math.max(1, loads.length);
    const spread = loads.reduce((a, b) => a + (b - mean) ** 2, 0) / Math.max(1, loads.length);
    return [unplaced, weighted, spread];
  }
}

export function roundOf(job: Job, visit: number): string | null {
  return job.visits.find((v) => v.index === visit)?.round ?? null;
}

/** Negative when `a` ranks before `b`; differences of rounding alone are none. */
export function compareCost(a: Cost, b: Cost): number {
  for (let i = 0; i < 3; i++) {
    const d = a[i]! - b[i]!;
    if (Math.abs(d) > 1e-9 * (1 + Math.abs(a[i]!))) return d;
  }
  return 0;
}
