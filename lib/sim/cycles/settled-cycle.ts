import type { CompiledSystem } from '../equations/types';
import { Course, type Step } from '../integrate/course';
import { History } from '../integrate/history';
import { Extremes } from './extremes';
import { type Crossing, repeats } from './repeats';

export interface Extent {
  readonly min: number;
  readonly max: number;
}

export type Settled =
  | {
      readonly outcome: 'cycle';
      readonly period: number;
      /** Lowest and highest value of each readout over one period, in the order of the system's readouts. */
      readonly readouts: readonly Extent[];
      /** A state on the cycle, and the record that a next course can go on from. */
      readonly state: Float64Array;
      readonly history: History;
    }
  | { readonly outcome: 'steady'; readonly state: Float64Array }
  | { readonly outcome: 'failed'; readonly why: string };

/** Work still allowed, in steps × length of the stacked state; shared by several calls. */
export interface Budget {
  left: number;
}

const TOLERANCE = 1e-8;
const SAMPLES_A_STEP = 4;
const STEPS_A_CYCLE = 30;
const WARM_UP = 3;
const RESECTION = 8;
const MAX_CYCLES = 400;
/** A swing below this share of the largest one seen counts as steady. */
const STEADY_SHARE = 1e-4;
const STEADY_SIZE = 1e-9;

/**
 * The stable cycle that the course from a state (or from the record of an earlier course) settles to.
 *
 * Cycles are cut where the variable that swings most crosses the middle of its swing upwards, and compared until they
 * repeat to about 1e-3 of the swing, the still missing part being judged from how fast they converge.
 * `expectedPeriod` sets the time scale alone: at most 400 of it are followed. Extremes are read from 120 places a cycle.
 */
export function settledCycle(
  system: CompiledSystem,
  p: Float64Array,
  from: Float64Array | History,
  expectedPeriod: number,
  budget: Budget = { left: Number.POSITIVE_INFINITY },
): Settled {
  if (!(expectedPeriod > 0 && Number.isFinite(expectedPeriod))) {
    return { outcome: 'failed', why: 'no period to expect is known' };
  }
  // A record is copied, so that its owner can start other courses from it.
  const start = from instanceof History ? from.copy() : from;
  const course = new Course(system, p, start, {
    tolerance: TOLERANCE,
    maxStep: expectedPeriod / STEPS_A_CYCLE,
    maxSteps: 40_000,
  });
  return new Watch(system, p, course, expectedPeriod, budget).run();
}

class Watch {
  private readonly z: Float64Array;
  private readonly values: Float64Array;
  private readonly states: Extremes;
  private readonly reads: Extremes;
  private readonly largest: Float64Array;
  private crossings: Crossing[] = [];
  private variable = -1;
  private level = 0;
  private previous = 0;
  private previousTime = 0;

  constructor(
    private readonly system: CompiledSystem,
    private readonly p: Float64Array,
    private readonly course: Course,
    private readonly period: number,
    private readonly budget: Budget,
  ) {
    this.z = new Float64Array(system.n * (system.K + 1));
    this.values = new Float64Array(system.readouts.length);
    this.states = new Extremes(system.n);
    this.reads = new Extremes(system.readouts.length);
    this.largest = new Float64Array(system.n);
  }

  run(): Settled {
    const begin = this.course.time;
    let window = WARM_UP;
    while (this.course.time - begin < MAX_CYCLES * this.period) {
      const known = this.crossings.length;
      const advance = this.course.advance(this.course.time + window * this.period, (step) =>
        this.watch(step),
      );
      if (advance.outcome === 'escaped') {
        return { outcome: 'failed', why: 'the course leaves the finite range' };
      }
      if (advance.outcome === 'too-many-steps') {
        return { outcome: 'failed', why: 'the course is too stiff to be followed' };
      }
      if (this.budget.left <= 0) {
        return { outcome: 'failed', why: 'the work allowed for cycles is used up' };
      }
      if (advance.outcome === 'stopped') return this.result();
      if (this.crossings.length - known >= 2) continue;
      if (!this.section()) return { outcome: 'steady', state: this.course.x.slice() };
      window = RESECTION;
    }
    return this.crossings.length > MAX_CYCLES / 10 && repeats(this.crossings, 0.05)
      ? this.result(0.05)
      : { outcome: 'failed', why: `no cycle repeats within ${MAX_CYCLES} periods` };
  }

  /** Cuts where the variable of largest relative swing crosses its middle; false = nothing swings any more. */
  private section(): boolean {
    let best = 0;
    let steady = true;
    for (let i = 0; i < this.system.n; i += 1) {
      const [low, high] = [this.states.low[i]!, this.states.high[i]!];
      const swing = high - low;
      const size = Math.max(Math.abs(high), Math.abs(low));
      this.largest[i] = Math.max(this.largest[i]!, swing);
      if (swing > STEADY_SHARE * this.largest[i]! && swing > STEADY_SIZE * size) steady = false;
      const share = size > 0 ? swing / size : 0;
      if (share <= best) continue;
      best = share;
      this.variable = i;
      this.level = (high + low) / 2;
    }
    if (steady || this.variable < 0) return false;
    this.crossings = [];
    this.previous = this.course.x[this.variable]!;
    this.previousTime = this.course.time;
    this.forget();
    return true;
  }

  private forget(): void {
    this.states.forget();
    this.reads.forget();
  }

  /** Looks at one step; true once the cycles repeat or have died away. */
  private watch(step: Step): boolean {
    this.budget.left -= this.z.length;
    if (this.budget.left <= 0) return true;
    for (let s = 1; s <= SAMPLES_A_STEP; s += 1) {
      const t =
        s === SAMPLES_A_STEP ? step.to : step.from + ((step.to - step.from) * s) / SAMPLES_A_STEP;
      step.state(t, this.z);
      this.note(t);
      if (this.variable < 0) continue;
      const now = this.z[this.variable]!;
      const crossed = this.previous < this.level && now >= this.level;
      this.previous = now;
      if (crossed && this.cross(step, this.previousTime, t)) return true;
      this.previousTime = t;
    }
    return false;
  }

  private note(time: number): void {
    this.states.add(time, this.z);
    this.system.readout(this.z, this.p, this.values);
    this.reads.add(time, this.values);
  }

  private cross(step: Step, before: number, after: number): boolean {
    let [a, b] = [Math.max(before, step.from), after];
    for (let i = 0; i < 45; i += 1) {
      const middle = (a + b) / 2;
      step.state(middle, this.z);
      if (this.z[this.variable]! < this.level) a = middle;
      else b = middle;
    }
    step.state(b, this.z);
    const swing = this.states.swing();
    this.crossings.push({
      time: b,
      state: this.z.slice(0, this.system.n),
      swing,
      readouts: Array.from(this.reads.low, (min, i) => ({ min, max: this.reads.high[i]! })),
    });
    // The stretch before the first crossing is no whole cycle: its swing says nothing.
    let died = this.crossings.length > 1;
    for (let i = 0; i < swing.length; i += 1) {
      this.largest[i] = Math.max(this.largest[i]!, swing[i]!);
      if (swing[i]! > STEADY_SHARE * this.largest[i]!) died = false;
    }
    this.forget();
    return died || repeats(this.crossings) !== null;
  }

  private result(tolerance?: number): Settled {
    const count = repeats(this.crossings, tolerance);
    if (count === null) return { outcome: 'steady', state: this.course.x.slice() };
    const last = this.crossings.slice(-count);
    const end = last[last.length - 1]!;
    const start = this.crossings[this.crossings.length - 1 - count]!;
    return {
      outcome: 'cycle',
      period: end.time - start.time,
      readouts: end.readouts.map((_, i) => ({
        min: Math.min(...last.map((c) => c.readouts[i]!.min)),
        max: Math.max(...last.map((c) => c.readouts[i]!.max)),
      })),
      state: end.state,
      history: this.course.history,
    };
  }
}
