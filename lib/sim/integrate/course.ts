import type { CompiledSystem } from '../equations/types';
import { breakPoints } from './break-points';
import { finite, runaway } from './finite';
import { History, quartic } from './history';
import type { RosenbrockStep } from './rosenbrock';
import { Stiffness } from './stiffness';
import { extension, NODES, type Slopes, stageState, stepError } from './tableau';

export type Advance =
  | { outcome: 'reached' }
  | { outcome: 'stopped' }
  /** The state left the finite range, or can only be followed by vanishing steps. */
  | { outcome: 'escaped'; time: number; variable: number }
  | { outcome: 'too-many-steps'; time: number };

/** One accepted step [from, to]; `state` evaluates the stacked state z inside it. */
export interface Step {
  readonly from: number;
  readonly to: number;
  state(t: number, z: Float64Array): void;
}

export interface CourseOptions {
  /** Relative error aimed at in each step. */
  readonly tolerance?: number;
  /** Steps allowed in one call of `advance`. */
  readonly maxSteps?: number;
  readonly maxStep?: number;
}

const FLOOR = 1e-3;
const ORDER = 5;
const MAX_ITERATIONS = 12;
const BESIDE = 1e-8;

/**
 * A time course of a system with or without delays, by the method of steps (Bellen & Zennaro 2003) on the pair of
 * Dormand & Prince with its continuous extension. Break points are hit exactly; a delay of 0 is the present state;
 * a step longer than a delay is iterated on its own extension.
 * Errors are weighed against each variable's own size, so that units do not matter.
 */
export class Course {
  readonly history: History;
  readonly x: Float64Array;
  readonly delays: Float64Array;
  private readonly longest: number;
  private readonly shortest: number;
  private readonly breaks: number[];
  private readonly tolerance: number;
  private readonly maxSteps: number;
  private readonly maxStep: number;
  private readonly z: Float64Array;
  private readonly k: Slopes;
  private readonly next: Float64Array;
  private readonly c: Float64Array;
  private readonly size: Float64Array;
  private h = 0;
  private inside = false;
  private stepFrom = 0;
  private stepLength = 0;
  /** The state of the last slope but one, to judge stiffness from. */
  private readonly near: Float64Array;
  private readonly stiffness: Stiffness;

  constructor(
    private readonly system: CompiledSystem,
    private readonly p: Float64Array,
    from: Float64Array | History,
    options: CourseOptions = {},
  ) {
    const n = system.n;
    this.history = from instanceof History ? from : new History(n, Float64Array.from(from));
    this.x = new Float64Array(n);
    this.history.at(this.history.end, this.x);
    this.delays = new Float64Array(system.K);
    system.delays(p, this.delays);
    this.longest = Math.max(0, ...this.delays);
    this.shortest = Math.min(Number.POSITIVE_INFINITY, ...this.delays.filter((d) => d > 0));
    this.breaks = breakPoints([...this.delays], this.history.end, ORDER);
    this.tolerance = options.tolerance ?? 1e-9;
    this.maxSteps = options.maxSteps ?? 1_000_000;
    this.maxStep = options.maxStep ?? Number.POSITIVE_INFINITY;
    this.z = new Float64Array(n * (system.K + 1));
    const slope = () => new Float64Array(n);
    this.k = [slope(), slope(), slope(), slope(), slope(), slope(), slope()];
    this.next = new Float64Array(n);
    this.near = new Float64Array(n);
    this.stiffness = new Stiffness(system, p);
    this.c = new Float64Array(5 * n);
    this.size = this.x.map(Math.abs);
    this.slope(this.history.end, this.x, this.k[0]);
  }

  private get order(): number {
    return this.stiffness.method ? ORDER - 1 : ORDER;
  }

  get time(): number {
    return this.history.end;
  }

  /** Advances to `until`; `onStep` may return true to stop after a step. */
  advance(until: number, onStep?: (step: Step) => boolean): Advance {
    for (let count = 0; this.time < until; count += 1) {
      if (count >= this.maxSteps) return { outcome: 'too-many-steps', time: this.time };
      const failure = this.step(until);
      if (failure) return failure;
      if (onStep?.(this.lastStep())) return { outcome: 'stopped' };
    }
    return { outcome: 'reached' };
  }

  private lastStep(): Step {
    return {
      from: this.stepFrom,
      to: this.time,
      state: (t, z) => this.stateAt(t, z),
    };
  }

  /** The stacked state z at a recorded time. */
  stateAt(t: number, z: Float64Array): void {
    const n = this.system.n;
    this.history.at(t, z);
    for (let d = 0; d < this.delays.length; d += 1) {
      this.history.at(t - this.delays[d]!, z, (d + 1) * n);
    }
  }

  /** f at time s with present state y; falls back to 0 for nonnegative variables that rounding took below it. */
  private slope(s: number, y: Float64Array, out: Float64Array): boolean {
    const n = this.system.n;
    this.z.set(y);
    for (let d = 0; d < this.delays.length; d += 1) {
      const delay = this.delays[d]!;
      const offset = (d + 1) * n;
      if (delay === 0) this.z.set(y, offset);
      else if (this.inside && s - delay > this.time) {
        quartic(this.c, n, (s - delay - this.time) / this.stepLength, this.z, offset);
      } else this.history.at(s - delay, this.z, offset);
    }
    this.system.rhs(this.z, this.p, out);
    if (finite(out)) return true;
    for (let i = 0; i < this.z.length; i += 1) {
      if (this.system.nonnegative[i % n] && this.z[i]! < 0) this.z[i] = 0;
    }
    this.system.rhs(this.z, this.p, out);
    if (finite(out)) return true;
    // A removable 0/0, such as x/(1 - exp(-x)) at 0, is stepped beside.
    for (let i = 0; i < this.z.length; i += 1) {
      this.z[i] = this.z[i]! + BESIDE * (Math.abs(this.z[i]!) || this.size[i % n]! || 1);
    }
    this.system.rhs(this.z, this.p, out);
    return finite(out);
  }

  /** One accepted step, however often it must be tried; the failure if there is none. */
  private step(until: number): Advance | null {
    if (this.h === 0) this.h = this.firstStep(until);
    for (;;) {
      const { h, end } = this.fit(until);
      if (h <= 8 * Number.EPSILON * Math.abs(this.time) || h < 1e-290) return this.escape();
      const error = this.attempt(h);
      if (error <= 1) {
        this.accept(h, end, error);
        return null;
      }
      this.h =
        h * (Number.isFinite(error) ? Math.max(0.2, 0.9 * error ** (-1 / this.order)) : 0.25);
    }
  }

  /** The step that may be taken: not past the end or a break point, nor a little past a delay. */
  private fit(until: number): { h: number; end: number } {
    while (this.breaks.length > 0 && this.breaks[0]! <= this.time) this.breaks.shift();
    let wanted = Math.min(this.h, this.maxStep);
    if (wanted > this.shortest && wanted < 4 * this.shortest) wanted = this.shortest;
    const barrier = Math.min(until, this.breaks[0] ?? Number.POSITIVE_INFINITY);
    const left = barrier - this.time;
    if (wanted >= left * (1 - 1e-12)) return { h: left, end: barrier };
    // Two even steps rather than a long and a tiny one.
    if (wanted > left / 2) wanted = left / 2;
    return { h: wanted, end: this.time + wanted };
  }

  /** Tries a step; returns its error over the tolerance, infinite where it cannot be evaluated. */
  private attempt(h: number): number {
    this.stepLength = h;
    if (this.stiffness.method) return this.implicitStep(this.stiffness.method, h);
    this.inside = h > this.shortest;
    if (!this.inside) return this.stages(h);
    this.guess(h);
    const previous = new Float64Array(this.system.n);
    for (let i = 0; i < MAX_ITERATIONS; i += 1) {
      previous.set(this.next);
      const error = this.stages(h);
      if (!Number.isFinite(error)) return error;
      extension(this.x, this.next, h, this.k, this.c);
      const change = i === 0 ? Number.POSITIVE_INFINITY : this.distance(previous, this.next);
      if (change < 0.1) return error;
    }
    return Number.POSITIVE_INFINITY;
  }

  private implicitStep(method: RosenbrockStep, h: number): number {
    const end = this.time + h;
    const slope = (y: Float64Array, out: Float64Array) => this.slope(end, y, out);
    if (!method.take(this.x, h, this.next, slope)) return Number.POSITIVE_INFINITY;
    if (!this.slope(end, this.next, this.k[6])) return Number.POSITIVE_INFINITY;
    let worst = 0;
    for (let i = 0; i < this.next.length; i += 1) {
      worst = Math.max(worst, Math.abs(method.error[i]!) / this.weight(i, h));
    }
    return Number.isNaN(worst) ? Number.POSITIVE_INFINITY : worst;
  }

  /** A first idea of the course inside the step: straight on. */
  private guess(h: number): void {
    const n = this.system.n;
    this.c.fill(0);
    for (let i = 0; i < n; i += 1) {
      this.c[i] = this.x[i]!;
      this.c[n + i] = h * this.k[0][i]!;
    }
  }

  private stages(h: number): number {
    const n = this.system.n;
    const { k, next, x } = this;
    for (let s = 1; s < 7; s += 1) {
      stageState(s, x, h, k, next);
      if (s === 5) this.near.set(next);
      if (!this.slope(this.time + NODES[s]! * h, next, k[s]!)) return Number.POSITIVE_INFINITY;
    }
    let worst = 0;
    for (let i = 0; i < n; i += 1) {
      const ratio = Math.abs(h * stepError(i, k)) / this.weight(i, h);
      if (!(ratio <= worst)) worst = ratio;
    }
    return Number.isNaN(worst) ? Number.POSITIVE_INFINITY : worst;
  }

  /** The error allowed to variable i: relative to its size now, and a little to the largest it has had. */
  private weight(i: number, h: number): number {
    const now = Math.max(
      Math.abs(this.x[i]!),
      Math.abs(this.next[i]!),
      h * Math.abs(this.k[0][i]!),
    );
    return this.tolerance * (now + FLOOR * this.size[i]!) + 1e-300;
  }

  private distance(a: Float64Array, b: Float64Array): number {
    let worst = 0;
    for (let i = 0; i < a.length; i += 1) {
      worst = Math.max(worst, Math.abs(a[i]! - b[i]!) / this.weight(i, this.stepLength));
    }
    return worst;
  }

  private accept(h: number, end: number, error: number): void {
    extension(this.x, this.next, h, this.k, this.c);
    const { k, next, near } = this;
    if (this.stiffness.method) {
      // Stiff steps are joined by a cubic: the quartic term belongs to the explicit pair.
      this.c.fill(0, 4 * this.x.length);
      this.stiffness.implicit(h);
    } else this.stiffness.explicit(h, [k[6], k[5]], [next, near], (i) => this.weight(i, h));
    this.stepFrom = this.time;
    this.history.append(this.time, h, end, this.c);
    this.history.forget(this.time - this.longest - 2 * h);
    this.x.set(this.next);
    for (let i = 0; i < this.x.length; i += 1) {
      this.size[i] = Math.max(this.size[i]!, Math.abs(this.x[i]!));
    }
    this.inside = false;
    const jump = this.breaks.length > 0 && this.breaks[0] === end;
    if (jump) this.slope(end, this.x, this.k[0]);
    else this.k[0].set(this.k[6]);
    const growth = Math.min(5, 0.9 * Math.max(error, 1e-10) ** (-1 / this.order));
    // A step that was cut to meet a barrier says little about the next one.
    this.h = Math.max(h * growth, growth >= 1 ? Math.min(this.h, 5 * h) : 0);
  }

  /** Hairer, Nørsett & Wanner 1993, II.4: a step whose second-order term is small. */
  private firstStep(until: number): number {
    let rate = 0;
    for (let i = 0; i < this.x.length; i += 1) {
      const slope = Math.abs(this.k[0][i]!);
      if (this.x[i] !== 0) rate = Math.max(rate, slope / Math.abs(this.x[i]!));
    }
    const span = until - this.time;
    return Math.min(span * 1e-3, rate > 0 ? 1e-3 / rate : span * 1e-6, this.shortest);
  }

  private escape(): Advance {
    return { outcome: 'escaped', time: this.time, variable: runaway(this.x, this.k[0]) };
  }
}
