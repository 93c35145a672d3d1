import type { Side } from '@/lib/contracts';
import { midNode } from '../steady/branch';
import type { BranchContext, Node, TrackedRoot } from '../steady/node';
import { type Crossing, type CrossingReport, inspectCrossing, locateCrossing } from './locate';

/** An onset: stability changes here because a complex pair crosses while all else is stable. */
export interface Onset extends Crossing {
  readonly growthSlope: number;
}

/** The side of the onset on which the steady state is unstable. */
export function sideOf(onset: Pick<Onset, 'growthSlope'>): Side {
  return onset.growthSlope > 0 ? 'above' : 'below';
}

/** Something else that happens to stability along the branch. */
export interface StabilityEvent {
  readonly kind: 'real-crossing' | 'fold' | 'further-pair' | 'unresolved';
  readonly control: number;
  /** The neighbours that enclose a fold or real crossing. */
  readonly between?: readonly [Node, Node];
}

export interface Scan {
  readonly onsets: Onset[];
  /** The branch with the points that refinement added. */
  readonly nodes: Node[];
  readonly events: StabilityEvent[];
  /** An onset verified just outside the range. */
  readonly beyond: Onset[];
}

/** Halvings of one step before it is given up. */
const DEPTH = 34;

/**
 * Walks the branch and resolves every change in the number of unstable dimensions.
 *
 * A step is halved while (1) the count changes by other than one real root or one located pair, or
 * (2) the tangent of any complex root's real part, drawn from either end, reaches zero by mid-step
 * although no crossing accounts for it: a pair of onsets inside one step bends a root that way.
 */
export function scanBranch(context: BranchContext, branch: readonly Node[]): Scan {
  const scan: Scan = { onsets: [], nodes: [branch[0]!], events: [], beyond: [] };
  for (let i = 1; i < branch.length; i++) {
    resolve(context, scan, branch[i - 1]!, branch[i]!, 0);
    scan.nodes.push(branch[i]!);
  }
  examineEnd(context, scan, branch[0]!);
  if (branch.length > 1) examineEnd(context, scan, branch[branch.length - 1]!);
  scan.onsets.sort((a, b) => a.control - b.control);
  return scan;
}

function resolve(context: BranchContext, scan: Scan, a: Node, b: Node, depth: number): void {
  const change = b.spectrum.unstable - a.spectrum.unstable;
  // With more than one pair unstable throughout, nothing here can be an onset.
  if (Math.min(a.spectrum.unstable, b.spectrum.unstable) > 2) {
    if (change % 2 !== 0) recordReal(scan, a, b);
    return;
  }
  const h = chord(context, a, b);
  if (Math.abs(change) === 2) {
    const crossing = crossingBetween(context, a, b, h);
    if (crossing && !bends(a, b, h, change)) {
      accept(context, scan, crossing, Math.min(a.spectrum.unstable, b.spectrum.unstable));
      return;
    }
    if (crossing && depth >= DEPTH) {
      accept(context, scan, crossing, Math.min(a.spectrum.unstable, b.spectrum.unstable));
      return;
    }
  } else if (Math.abs(change) <= 1 && !bends(a, b, h, change)) {
    if (change !== 0) recordReal(scan, a, b);
    return;
  }
  const mid = depth < DEPTH ? midNode(context, a, b) : null;
  if (!mid) {
    if (change !== 0) giveUp(scan, a, b, change);
    return;
  }
  resolve(context, scan, a, mid, depth + 1);
  if (depth < 6) scan.nodes.push(mid);
  resolve(context, scan, mid, b, depth + 1);
}

function giveUp(scan: Scan, a: Node, b: Node, change: number): void {
  const control = (a.control + b.control) / 2;
  if (Math.abs(change) === 1) recordReal(scan, a, b);
  else scan.events.push({ kind: 'unresolved', control });
}

/** One real root changed sign: at a fold the control turns round there, elsewhere it does not. */
function recordReal(scan: Scan, a: Node, b: Node): void {
  scan.events.push({
    kind: a.controlSlope * b.controlSlope < 0 ? 'fold' : 'real-crossing',
    control: (a.control + b.control) / 2,
    between: [a, b],
  });
}

/** The control at which a fold or real crossing lies, to about 1e-6 of a step, by halving. */
export function refineEvent(context: BranchContext, event: StabilityEvent): number {
  if (!event.between) return event.control;
  let [a, b] = event.between;
  for (let i = 0; i < 20; i++) {
    const mid = midNode(context, a, b);
    if (!mid) break;
    if (mid.spectrum.unstable === a.spectrum.unstable) a = mid;
    else b = mid;
  }
  return (a.control + b.control) / 2;
}

function chord(context: BranchContext, a: Node, b: Node): number {
  const dx = b.x.map((v, i) => v - a.x[i]!);
  return context.length(dx, b.control - a.control, a.scale);
}

/** Does any complex root, followed along its tangent from either end, reach the axis unaccounted for? */
function bends(a: Node, b: Node, h: number, change: number): boolean {
  const from = a.complex.some((r) => reaches(r, 0.55 * h, change));
  return from || b.complex.some((r) => reaches(r, -0.55 * h, change));
}

function reaches(root: TrackedRoot, along: number, change: number): boolean {
  const ahead = root.re + root.slope.re * along;
  if (Math.abs(change) === 2) {
    // The counted crossing itself must run one way; anything running against it is unexplained.
    const towards = root.slope.re * Math.sign(change);
    return towards < 0 && root.re * ahead < 0;
  }
  return root.re * ahead < 0;
}

/** A pair of purely imaginary roots on the branch between two nodes. */
function crossingBetween(context: BranchContext, a: Node, b: Node, h: number): Crossing | null {
  const guesses = matches(a, b, h);
  for (const { share, omega } of guesses) {
    const x = a.x.map((v, i) => v + share * (b.x[i]! - v));
    const control = a.control + share * (b.control - a.control);
    const found = locateCrossing(context, { x, omega, control });
    if (found && liesBetween(context, a, b, found, h)) return found;
  }
  return null;
}

function matches(a: Node, b: Node, h: number): { share: number; omega: number }[] {
  const out: { share: number; omega: number; misfit: number }[] = [];
  for (const p of a.complex) {
    for (const q of b.complex) {
      if (p.re > a.spectrum.tolerance === q.re > b.spectrum.tolerance) continue;
      const misfit =
        Math.abs(p.im + p.slope.im * h - q.im) + Math.abs(p.re + p.slope.re * h - q.re);
      const gap = p.re - q.re;
      const share = gap !== 0 ? Math.min(1, Math.max(0, p.re / gap)) : 0.5;
      out.push({ share, omega: p.im + share * (q.im - p.im), misfit });
    }
  }
  return out.sort((p, q) => p.misfit - q.misfit).slice(0, 4);
}

function liesBetween(
  context: BranchContext,
  a: Node,
  b: Node,
  found: Crossing,
  h: number,
): boolean {
  const n = a.x.length;
  let dot = 0;
  for (let i = 0; i < n; i++) {
    dot += ((found.x[i]! - a.x[i]!) * (b.x[i]! - a.x[i]!)) / a.scale[i]! ** 2;
  }
  const across =
    dot / n + ((found.control - a.control) * (b.control - a.control)) / context.width ** 2;
  const along = across / (h * h);
  const dx = found.x.map((v, i) => v - a.x[i]! - along * (b.x[i]! - a.x[i]!));
  const off = context.length(
    dx,
    found.control - a.control - along * (b.control - a.control),
    a.scale,
  );
  const slack = 1e-7 / Math.max(h, 1e-7) + 1e-6;
  return along > -slack && along < 1 + slack && off < 0.5 * h + 1e-9;
}

function accept(context: BranchContext, scan: Scan, at: Crossing, others: number): void {
  const report = inspectCrossing(context, at);
  if (!report) {
    scan.events.push({ kind: 'unresolved', control: at.control });
    return;
  }
  if (others > 0 || report.others > 0) {
    scan.events.push({ kind: 'further-pair', control: at.control });
    return;
  }
  addOnset(context, scan.onsets, at, report);
}

function addOnset(
  context: BranchContext,
  list: Onset[],
  at: Crossing,
  report: CrossingReport,
): void {
  const same = list.some(
    (o) =>
      Math.abs(o.control - at.control) < 1e-9 * context.width &&
      Math.abs(o.omega - at.omega) < 1e-6 * at.omega,
  );
  if (!same) list.push({ ...at, growthSlope: report.growthSlope });
}

/**
 * An end of the branch may lie on an onset, where the sign of a real part is rounding; or one may lie a
 * little outside, which is worth a note. Looks a tenth of the range around.
 */
function examineEnd(context: BranchContext, scan: Scan, end: Node): void {
  const { from, to, width } = context;
  if (end.control !== from && end.control !== to) return;
  for (const root of end.complex) {
    const perControl = root.slope.re / end.controlSlope;
    if (!(Math.abs(root.re) < 0.15 * width * Math.abs(perControl))) continue;
    const shift = -root.re / perControl;
    const x = end.x.map((v, i) => v + (end.tangent[i]! / end.controlSlope) * shift);
    const guess = { x, omega: root.im, control: end.control + shift };
    const found = locateCrossing(context, guess);
    if (!found || Math.abs(found.control - end.control) > 0.1 * width) continue;
    const near = found.x.map((v, i) => v - x[i]!);
    if (context.length(near, 0, end.scale) > 0.1) continue;
    if (!context.problem.isPhysical(found.x, end.scale)) continue;
    const report = inspectCrossing(context, found);
    if (!report || report.others > 0) continue;
    // A centre keeps its pair on the axis for every control: nothing crosses.
    if (Math.abs(report.growthSlope) * width < 1e-9 * found.omega) continue;
    const slack = 1e-10 * width + 1e-12 * Math.abs(end.control);
    if (found.control > from - slack && found.control < to + slack) {
      if (Math.abs(found.control - end.control) > slack) continue;
      const clamped = { ...found, control: Math.min(to, Math.max(from, found.control)) };
      addOnset(context, scan.onsets, clamped, report);
    } else addOnset(context, scan.beyond, found, report);
  }
}
