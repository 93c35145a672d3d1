import { type Settled, settledCycle } from '../cycles/settled-cycle';
import type { CompiledSystem } from '../equations/types';
import type { Analysis } from './analyse';
import type { Onset } from './scan';

/** Settled courses at most for one window. */
const CAP = 70;
/** The first push away from rest, as a share of each variable. */
const KICK = 0.02;

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
  onset: Onset,
  cancelled?: () => boolean,
): { from: number; to: number } | null {
  const walk = new Walk(system, analysis, onset, cancelled);
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
    private readonly onset: Onset,
    private readonly cancelled?: () => boolean,
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
    while (this.courses < CAP && !this.cancelled?.() && (limit - at) * inward > 0) {
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
      const settled = settledCycle(this.system, this.p, pushed(onset.x), period);
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

/** The state with its variables moved apart a little. */
function pushed(x: Float64Array): Float64Array {
  const largest = x.reduce((m, v) => Math.max(m, Math.abs(v)), 0);
  return x.map((v, i) => v + (i % 2 === 0 ? 1 : -1) * KICK * (Math.abs(v) || largest || 1));
}

/**
 * How far the control may go on the stable side, along the onset's own sheet of the branch: to the
 * neighbouring onset, the loss of stability, a fold or the branch's end.
 */
function stableLimit({ scan, context }: Analysis, onset: Onset, inward: 1 | -1): number {
  const { nodes } = scan;
  const gaps = nodes.map((n) =>
    context.length(
      n.x.map((v, i) => v - onset.x[i]!),
      n.control - onset.control,
      n.scale,
    ),
  );
  const nearest = gaps.indexOf(Math.min(...gaps));
  const sheet = Math.sign(nodes[nearest]!.controlSlope) * inward;
  let limit = onset.control;
  for (let i = nearest; i >= 0 && i < nodes.length; i += sheet) {
    const node = nodes[i]!;
    const ahead = (node.control - limit) * inward;
    if (i !== nearest && (ahead < 0 || node.spectrum.unstable > 0)) break;
    if (ahead > 0) limit = node.control;
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
