import type { Branch, Cycle } from '@/lib/contracts/predict';
import type { CompiledSystem } from '../equations/types';
import type { History } from '../integrate/history';
import { type Budget, type Settled, settledCycle } from './settled-cycle';
import { type OscillatingSpan, oscillatingSpans, spacedControls } from './spans';

export interface CyclesAlongBranch {
  /** Stable cycles by rising control. */
  readonly cycles: Cycle[];
  /** Control values at which no cycle could be had, and why. */
  readonly omitted: { control: number; why: string }[];
}

export interface OnsetPlace {
  readonly value: number;
  readonly period: number;
  readonly oscillates: 'above' | 'below';
}

const COUNT = 24;
/** Steps × state length for all cycles of one answer: two seconds at most for small systems. */
const WORK = 3_000_000;
const KICK = 0.2;
const MOST_FAILURES = 3;
/** A swing that changes by more than this share of the largest one gets a cycle in between. */
const LARGEST_JUMP = 0.1;
/** Cycles put in between, at most, in one range. */
const MOST_BETWEEN = 10;

/**
 * Stable cycles over the ranges in which the steady state is unstable, about 24 in all, closer together near an onset
 * (amplitudes grow like a square root there). Each range is walked from where cycles settle fast towards
 * both ends; every course goes on from the cycle before. Where a swing changes by more than a tenth of the
 * largest from one cycle to the next, cycles are put in between, at most 10 in a range.
 * `p0` holds the parameters; its control entry is not read.
 */
export function cyclesAlongBranch(
  system: CompiledSystem,
  p0: Float64Array,
  controlIndex: number,
  found: { branch: Branch; onsets: readonly OnsetPlace[] },
): CyclesAlongBranch {
  const spans = oscillatingSpans(found.branch, found.onsets);
  const cycles: Cycle[] = [];
  const budget: Budget = { left: WORK };
  const omitted: CyclesAlongBranch['omitted'] = [];
  for (const span of spans) {
    const controls = spacedControls(span, Math.max(6, Math.round(COUNT / spans.length)));
    const middle = Math.floor(controls.length * startShare(span));
    const walk = new Walk(system, p0, controlIndex, found.branch, span, cycles, omitted, budget);
    const first = walk.visit(controls[middle]!, null);
    walk.along(controls.slice(middle + 1), first);
    walk.along(controls.slice(0, middle).reverse(), first);
    walk.fillJumps();
  }
  cycles.sort((a, b) => a.control - b.control);
  omitted.sort((a, b) => a.control - b.control);
  return { cycles, omitted };
}

/** Cycles settle fastest far from the onsets. */
function startShare(span: OscillatingSpan): number {
  if (span.onsetAtFrom && span.onsetAtTo) return 0.5;
  return span.onsetAtFrom ? 0.8 : 0.2;
}

type Visit = { history: History; period: number } | null;

class Walk {
  private readonly found: { cycle: Cycle; visit: Visit }[] = [];

  constructor(
    private readonly system: CompiledSystem,
    private readonly p0: Float64Array,
    private readonly controlIndex: number,
    private readonly branch: Branch,
    private readonly span: OscillatingSpan,
    private readonly cycles: Cycle[],
    private readonly omitted: CyclesAlongBranch['omitted'],
    private readonly budget: Budget,
  ) {}

  /** Visits controls in turn; gives up after several failures running, which the next would only repeat. */
  along(controls: readonly number[], first: Visit): void {
    let last = first;
    let failures = 0;
    for (const control of controls) {
      if (failures >= MOST_FAILURES) {
        this.omitted.push({ control, why: 'no cycle could be had at the values next to it' });
        continue;
      }
      last = this.visit(control, last);
      failures = last ? 0 : failures + 1;
    }
  }

  /** Halves the largest jump of swing again and again; a half that cannot be had ends it. */
  fillJumps(): void {
    for (let between = 0; between < MOST_BETWEEN; between += 1) {
      const found = this.found.sort((a, b) => a.cycle.control - b.cycle.control);
      const at = largestJump(found.map((f) => f.cycle));
      if (at < 0) return;
      const [before, after] = [found[at - 1]!, found[at]!];
      const middle = (before.cycle.control + after.cycle.control) / 2;
      if (!this.visit(middle, before.visit)) return;
    }
  }

  visit(control: number, before: Visit): Visit {
    const p = Float64Array.from(this.p0);
    p[this.controlIndex] = control;
    let settled: Settled | null = null;
    if (before) settled = settledCycle(this.system, p, before.history, before.period, this.budget);
    if (settled?.outcome !== 'cycle') {
      const start = kicked(this.system, this.branch, control);
      const period = this.span.periodAt(control);
      settled = settledCycle(this.system, p, start, period, this.budget);
    }
    if (settled.outcome === 'cycle') {
      const cycle = asCycle(this.system, control, settled);
      const visit = { history: settled.history, period: settled.period };
      this.cycles.push(cycle);
      this.found.push({ cycle, visit });
      return visit;
    }
    const why = settled.outcome === 'steady' ? 'the course settles to a steady state' : settled.why;
    this.omitted.push({ control, why });
    return null;
  }
}

/** Index of the cycle that differs most in swing from the one before it; -1 when all are alike enough. */
function largestJump(cycles: readonly Cycle[]): number {
  let [at, jump] = [-1, LARGEST_JUMP];
  for (const symbol of Object.keys(cycles[0]?.readouts ?? {})) {
    const swings = cycles.map(({ readouts }) => readouts[symbol]!.max - readouts[symbol]!.min);
    const largest = swings.reduce((a, b) => Math.max(a, b), 0);
    for (let i = 1; i < swings.length; i += 1) {
      const change = Math.abs(swings[i]! - swings[i - 1]!) / largest;
      if (change > jump) [at, jump] = [i, change];
    }
  }
  return at;
}

/** A cycle in the engine's answer. */
export function asCycle(
  system: CompiledSystem,
  control: number,
  cycle: Extract<Settled, { outcome: 'cycle' }>,
): Cycle {
  return {
    control,
    period: cycle.period,
    stable: true,
    readouts: Object.fromEntries(
      system.readouts.map((r, i) => [r.symbol, { ...cycle.readouts[i]! }]),
    ),
  };
}

/** The steady state nearest to `control` on the branch, pushed away from rest by a few per cent. */
export function kicked(system: CompiledSystem, branch: Branch, control: number): Float64Array {
  let nearest = 0;
  branch.control.forEach((value, i) => {
    const closer = Math.abs(value - control) < Math.abs(branch.control[nearest]! - control);
    if (closer) nearest = i;
  });
  const x = new Float64Array(system.n);
  let largest = 0;
  system.variables.forEach((symbol, i) => {
    x[i] = branch.steadyState[symbol]?.[nearest] ?? system.start[i]!;
    largest = Math.max(largest, Math.abs(x[i]!));
  });
  for (let i = 0; i < x.length; i += 1) {
    // Unlike pushes: equal ones would keep a symmetric system in its symmetric, quiet states.
    x[i] = x[i]! + Math.cos(1 + 2.4 * i) * KICK * (Math.abs(x[i]!) || largest || 1);
  }
  return x;
}
