import type { Branch } from '@/lib/contracts';
import { kicked } from '../cycles/along-branch';
import { type Settled, settledCycle } from '../cycles/settled-cycle';
import type { CompiledSystem } from '../equations/types';
import type { Analysis } from './analyse';
import type { Onset } from './scan';

/** Settled courses at most for one window. */
const CAP = 90;

type Cycle = Extract<Settled, { outcome: 'cycle' }>;

/**
 * Where the steady state and a large oscillation are both stable, for an abrupt onset.
 *
 * The oscillation is settled a little way inside the oscillating side and then carried, each course going
 * on from the cycle before, into the side where the steady state is stable, until it dies away; the edge
 * is closed in by halving to about 0.4 % of the window's width plus 0.08 % of the edge. Null where no
 * periodic oscillation settles beside the onset (it may be chaotic) or none survives on the stable side.
 */
export function coexistenceWindow(
  system: CompiledSystem,
  analysis: Analysis,
  branch: Branch,
  onset: Onset,
): { from: number; to: number } | null {
  const walk = new Walk(system, analysis, branch, onset);
  const edge = walk.edge();
  if (edge === null || Math.abs(edge - onset.control) <= 1e-6 * analysis.context.width) return null;
  return edge < onset.control
    ? { from: edge, to: onset.control }
    : { from: onset.control, to: edge };
}

class Walk {
  /** Direction of control into the stable side. */
  private readonly inward: 1 | -1;
  private readonly limit: number;
  private readonly p: Float64Array;
  private courses = 0;

  constructor(
    private readonly system: CompiledSystem,
    private readonly analysis: Analysis,
    private readonly branch: Branch,
    private readonly onset: Onset,
  ) {
    this.inward = onset.growthSlope > 0 ? -1 : 1;
    this.limit = stableLimit(analysis, onset, this.inward);
    this.p = Float64Array.from(analysis.context.problem.p);
  }

  /** The far edge of the window, or null. */
  edge(): number | null {
    const begin = this.beginning();
    if (!begin) return null;
    const { inward, limit, onset } = this;
    let at = begin.control;
    let cycle = begin.cycle;
    let bad: number | null = null;
    let step = Math.abs(at - onset.control) + 0.02 * Math.abs(limit - onset.control);
    while (this.courses < CAP && (limit - at) * inward > 0) {
      const tolerance = this.tolerance(at);
      let target: number = at + inward * step;
      if (bad !== null) {
        const gap = (bad - at) * inward;
        if (gap < tolerance) {
          // A longer step may have left the oscillation's basin: only a failure close by counts.
          const last = this.carry(bad, cycle);
          if (!last) break;
          at = bad;
          cycle = last;
          bad = null;
          step = 2 * tolerance;
          continue;
        }
        target = at + (inward * gap) / 2;
      }
      if ((limit - target) * inward < 0) target = limit;
      const next = this.carry(target, cycle);
      if (next) {
        at = target;
        cycle = next;
        step *= 1.6;
      } else bad = target;
    }
    if ((at - onset.control) * inward <= 0) return null;
    return bad === null ? at : (at + bad) / 2;
  }

  private tolerance(at: number): number {
    const floor = 1e-5 * this.analysis.context.width;
    return Math.max(floor, 8e-4 * Math.abs(at) + 4e-3 * Math.abs(at - this.onset.control));
  }

  /** The oscillation where the steady state is clearly, but not far, unstable. */
  private beginning(): { control: number; cycle: Cycle } | null {
    const { onset, inward, analysis } = this;
    const room = roomOutward(analysis, onset, inward);
    const period = (2 * Math.PI) / onset.omega;
    const wanted = 0.08 / (Math.abs(onset.growthSlope) * period);
    const first = Math.min(Math.max(wanted, 0.005 * room), 0.4 * room);
    for (const shift of [first, Math.min(3 * first, 0.6 * room)]) {
      const control = onset.control - inward * shift;
      this.p[analysis.context.problem.controlIndex] = control;
      this.courses += 1;
      const start = kicked(this.system, this.branch, control);
      const settled = settledCycle(this.system, this.p, start, period);
      if (settled.outcome === 'cycle') return { control, cycle: settled };
    }
    return null;
  }

  /** The oscillation at `control`, going on from a neighbour's; null where it dies away or changes kind. */
  private carry(control: number, from: Cycle): Cycle | null {
    this.p[this.analysis.context.problem.controlIndex] = control;
    this.courses += 1;
    const settled = settledCycle(this.system, this.p, from.history, from.period);
    if (settled.outcome !== 'cycle') return null;
    return swingRatio(settled, from) > 0.4 ? settled : null;
  }
}

/** Mean over the readouts of the swing beside another cycle's. */
function swingRatio(a: Cycle, b: Cycle): number {
  let sum = 0;
  let count = 0;
  a.readouts.forEach((r, i) => {
    const before = b.readouts[i]!.max - b.readouts[i]!.min;
    if (!(before > 0)) return;
    sum += Math.min(2, (r.max - r.min) / before);
    count += 1;
  });
  return count > 0 ? sum / count : 0;
}

/** How far the control may go on the stable side: neighbouring onset, loss of stability, end of the branch. */
function stableLimit({ scan }: Analysis, onset: Onset, inward: 1 | -1): number {
  const nodes = [...scan.nodes].filter((n) => (n.control - onset.control) * inward > 0);
  nodes.sort((a, b) => (a.control - b.control) * inward);
  let limit = onset.control;
  for (const node of nodes) {
    if (node.spectrum.unstable > 0) break;
    limit = node.control;
  }
  for (const other of scan.onsets) {
    const ahead = (other.control - onset.control) * inward;
    if (ahead > 0 && (limit - other.control) * inward > 0) limit = other.control;
  }
  return limit;
}

/** Distance to the neighbouring onset, or the end of the range, on the oscillating side. */
function roomOutward({ scan, context }: Analysis, onset: Onset, inward: 1 | -1): number {
  let room = inward < 0 ? context.to - onset.control : onset.control - context.from;
  for (const other of scan.onsets) {
    const away = (onset.control - other.control) * inward;
    if (away > 0) room = Math.min(room, away);
  }
  return room;
}
