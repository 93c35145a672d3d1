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

/**
 * Stable cycles over the ranges in which the steady state is unstable, about 24 in all, closer together near an onset
 * (amplitudes grow like a square root there). Each range is walked from where cycles settle fast towards
 * both ends; every course goes on from the cycle before.
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
      this.cycles.push(asCycle(this.system, control, settled));
      return { history: settled.history, period: settled.period };
    }
    const why = settled.outcome === 'steady' ? 'the course settles to a steady state' : settled.why;
    this.omitted.push({ control, why });
    return null;
  }
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
