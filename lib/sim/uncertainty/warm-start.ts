import type { CompiledSystem } from '../equations/types';
import type { Analysis, Range } from '../onset/analyse';
import { type Crossing, inspectCrossing, locateCrossing } from '../onset/locate';
import { type Onset, sideOf } from '../onset/scan';
import { BranchContext } from '../steady/node';
import { Problem, stateScale } from '../steady/problem';
import { expectedEnds, stableEnds } from './end-states';
import { matchOnsets } from './match-onsets';
import type { Draw, Sampler } from './sample';

/** Half-width, in standard deviations, of the differences that give the first-order prediction. */
const PROBE = 0.5;

interface Gradient {
  /** d(ln or plain value)/d(deviate) of each state, of ω and of the control, a row an uncertain parameter. */
  readonly rows: readonly Float64Array[];
}

/**
 * Solves the onsets of a draw starting from the nominal ones: first-order prediction in the spreads'
 * standard normal coordinates (positive quantities in logarithms), then Newton, then a certificate from
 * the whole spectrum.
 */
export class WarmStart {
  private readonly gradients: Gradient[];
  private readonly problem: Problem;
  private readonly context: BranchContext;

  constructor(
    system: CompiledSystem,
    private readonly range: Range,
    private readonly nominal: Analysis,
    sampling: Sampler,
  ) {
    this.problem = new Problem(system, system.values, range.controlIndex);
    this.context = new BranchContext(this.problem, range.from, range.to, system.start);
    this.context.seen.set(nominal.context.seen);
    this.gradients = nominal.scan.onsets.map((o) => this.gradient(o, sampling));
  }

  private gradient(onset: Onset, sampling: Sampler): Gradient {
    const d = sampling.uncertain.length;
    const rows: Float64Array[] = [];
    for (let k = 0; k < d; k++) {
      const ends = [PROBE, -PROBE].map((at) => {
        const deviates = new Float64Array(d);
        deviates[k] = at;
        this.problem.p.set(sampling.at(deviates));
        return locateCrossing(this.context, onset);
      });
      const base = pack(onset);
      const row = new Float64Array(base.length);
      const [plus, minus] = ends;
      if (plus && minus) {
        const up = toFlat(pack(plus), base);
        const down = toFlat(pack(minus), base);
        for (let i = 0; i < row.length; i++) row[i] = (up[i]! - down[i]!) / (2 * PROBE);
      }
      rows.push(row.every((v) => Number.isFinite(v)) ? row : new Float64Array(base.length));
    }
    return { rows };
  }

  /**
   * The draw's onset values in nominal order, null for one that moved out of the range; or null where a
   * full scan must decide.
   */
  solve(draw: Draw): (number | null)[] | null {
    const { from, to } = this.range;
    const values: number[] = [];
    const onsets = this.nominal.scan.onsets;
    for (let k = 0; k < onsets.length; k++) {
      const value = this.solveOne(onsets[k]!, this.gradients[k]!, draw);
      if (value === null) return null;
      if (k > 0 && !(value > values[k - 1]!)) return null;
      values.push(value);
    }
    const inside = (v: number) => v >= from && v <= to;
    if (values.every(inside)) return values;
    // One left the range: that no other came in shows in the stability of the range's two ends.
    const placed = values.map((value, k) => ({ value, oscillates: sideOf(onsets[k]!) }));
    const expected = expectedEnds(placed, from, to);
    const seen = expected ? stableEnds(this.context, this.nominal) : null;
    if (!expected || !seen || expected.from !== seen.from || expected.to !== seen.to) return null;
    const drawn = values.map((control, k) => ({ control, growthSlope: onsets[k]!.growthSlope }));
    return matchOnsets(
      onsets,
      drawn.filter((o) => inside(o.control)),
    );
  }

  private solveOne(onset: Onset, gradient: Gradient, draw: Draw): number | null {
    this.problem.p.set(draw.parameters);
    for (const guess of [this.predict(onset, gradient, draw), onset]) {
      const found = guess ? locateCrossing(this.context, guess) : null;
      if (found && this.isSame(onset, found)) return found.control;
    }
    return null;
  }

  private predict(onset: Onset, gradient: Gradient, draw: Draw): Crossing | null {
    const base = pack(onset);
    const flat = toFlat(base, base);
    gradient.rows.forEach((row, k) => {
      for (let i = 0; i < flat.length; i++) flat[i] = flat[i]! + row[i]! * draw.deviates[k]!;
    });
    const out = flat.map((v, i) => (base[i]! > 0 ? Math.exp(v) : v));
    if (!out.every((v) => Number.isFinite(v))) return null;
    const n = onset.x.length;
    return { x: out.slice(0, n), omega: out[n]!, control: out[n + 1]! };
  }

  /** Physical, everything else stable, crossing the same way. */
  private isSame(onset: Onset, found: Crossing): boolean {
    const scale = stateScale(found.x, Float64Array.from(this.context.seen));
    if (!this.problem.isPhysical(found.x, scale)) return false;
    const report = inspectCrossing(this.context, found);
    if (!report || report.others > 0) return false;
    return report.growthSlope * onset.growthSlope > 0;
  }
}

function pack(c: Crossing): Float64Array {
  const out = new Float64Array(c.x.length + 2);
  out.set(c.x);
  out[c.x.length] = c.omega;
  out[c.x.length + 1] = c.control;
  return out;
}

/** Logarithms where the nominal value is positive; NaN where the sign changed. */
function toFlat(values: Float64Array, base: Float64Array): Float64Array {
  return values.map((v, i) => (base[i]! > 0 ? Math.log(v) : v));
}
