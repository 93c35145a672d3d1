import type { CompiledSystem } from '../equations/types';
import { RosenbrockStep } from './rosenbrock';

/** Step × fastest rate beyond which the explicit pair is held back by stability (Hairer & Wanner 1996, IV.2). */
const STABLE = 3.25;
const STIFF_STEPS = 20;
const TRIAL_STEPS = 60;
/** An implicit step costs several explicit ones; it must be longer by at least this. */
const WORTHWHILE = 6;
const LARGEST_SYSTEM = 60;

/**
 * Chooses between the explicit pair and the implicit method for one course: over to the implicit one where stability and
 * not accuracy has bounded many steps running, and back for good where its steps turn out no longer.
 */
export class Stiffness {
  method: RosenbrockStep | null = null;
  private allowed: boolean;
  private held = 0;
  private trial = 0;
  private begun = 0;
  private explicitStep = 0;

  constructor(
    private readonly system: CompiledSystem,
    private readonly p: Float64Array,
  ) {
    this.allowed = system.K === 0 && system.n <= LARGEST_SYSTEM;
  }

  /** After an accepted explicit step: slopes `last` and `before` at the states `next` and `near`, and error weights. */
  explicit(
    h: number,
    [last, before]: readonly [Float64Array, Float64Array],
    [next, near]: readonly [Float64Array, Float64Array],
    weight: (i: number) => number,
  ): void {
    if (!this.allowed) return;
    let turn = 0;
    let move = 0;
    for (let i = 0; i < next.length; i += 1) {
      const w = weight(i);
      turn = Math.max(turn, (h * Math.abs(last[i]! - before[i]!)) / w);
      move = Math.max(move, Math.abs(next[i]! - near[i]!) / w);
    }
    this.held = turn > STABLE * move ? this.held + 1 : Math.max(0, this.held - 1);
    if (this.held < STIFF_STEPS) return;
    this.method = new RosenbrockStep(this.system, this.p);
    this.explicitStep = h;
    this.trial = TRIAL_STEPS;
    this.begun = 0;
  }

  /** After an accepted implicit step. */
  implicit(h: number): void {
    if (this.trial === 0) return;
    this.trial -= 1;
    this.begun += h;
    if (this.trial > 0 || this.begun > TRIAL_STEPS * WORTHWHILE * this.explicitStep) return;
    this.method = null;
    this.allowed = false;
  }
}
