import type { Note } from '@/lib/contracts';
import { luFactor, luSolve } from '../linalg/lu';
import { newton, scaledSize } from './newton';
import { type BranchContext, borderedJacobian, makeNode, type Node } from './node';
import { stateScale } from './problem';

/** Least scaled arclength of a step. */
const SMALLEST_STEP = 1e-7;
/** A turn of the tangent above this (cosine) halves the step. */
const TURN = Math.cos(0.25);
const NODE_CAP = 3000;

export interface FollowedBranch {
  readonly nodes: Node[];
  readonly notes: Note[];
  /** Why it ended: at an end of the range, out of the physical range, or for want of convergence. */
  readonly end: 'range' | 'physical' | 'incomplete';
}

/**
 * Follows the equilibrium from (x0, from) by pseudo-arclength (Keller 1977) with variables rescaled at
 * every step, through folds, until the control leaves [from, to] or a nonnegative variable turns
 * negative. The ends of the range are reached exactly. `null` where the first point is not regular.
 */
export function followBranch(
  context: BranchContext,
  x0: Float64Array,
  cancelled?: () => boolean,
): FollowedBranch | null {
  const { from, to, width } = context;
  const first = makeNode(context, x0, from, new Float64Array(x0.length), width);
  if (!first) return null;
  const nodes = [first];
  const notes: Note[] = [];
  let h = context.largestStep / 8;
  while (nodes.length < NODE_CAP) {
    if (cancelled?.()) break;
    const last = nodes[nodes.length - 1]!;
    const step = stepFrom(context, last, h);
    if (step.outcome === 'failed') {
      h = step.h / 4;
      if (h < SMALLEST_STEP) break;
      continue;
    }
    const { node } = step;
    if (node.control > to || node.control < from) {
      const end = endNode(context, last, node, node.control > to ? to : from);
      if (end) {
        nodes.push(end);
        return { nodes, notes, end: 'range' };
      }
      h = step.h / 2;
      if (h < SMALLEST_STEP) break;
      continue;
    }
    const negative = negativeVariable(context, node);
    if (negative !== null) {
      if (step.h > 1e-5) {
        h = step.h / 4;
        continue;
      }
      notes.push(leftRange(context, last, negative));
      return { nodes, notes, end: 'physical' };
    }
    nodes.push(node);
    h = Math.min(context.largestStep, step.h * (step.easy ? 1.6 : 1));
  }
  const last = nodes[nodes.length - 1]!;
  notes.push({
    code: 'branch-incomplete',
    text: `the steady state could be followed only as far as ${last.control.toPrecision(6)}`,
  });
  return { nodes, notes, end: 'incomplete' };
}

function leftRange({ problem }: BranchContext, last: Node, variable: number): Note {
  const control = problem.system.parameters[problem.controlIndex];
  return {
    code: 'left-physical-range',
    text: `the steady state leaves the physical range at ${control} = ${Number(last.control.toPrecision(6))}: ${problem.system.variables[variable]} would turn negative; nothing beyond is predicted on this branch`,
  };
}

type Step =
  | { outcome: 'ok'; node: Node; h: number; easy: boolean }
  | { outcome: 'failed'; h: number };

function stepFrom(context: BranchContext, last: Node, h: number): Step {
  const n = last.x.length;
  const x = new Float64Array(n);
  for (let i = 0; i < n; i++) x[i] = last.x[i]! + h * last.tangent[i]!;
  const control = last.control + h * last.controlSlope;
  const corrected = correct(context, x, control, last.tangent, last.controlSlope, last.scale);
  if (!corrected) return { outcome: 'failed', h };
  const dx = corrected.x.map((v, i) => v - last.x[i]!);
  const moved = context.length(dx, corrected.control - last.control, last.scale);
  if (moved > 1.5 * h) return { outcome: 'failed', h };
  const node = makeNode(context, corrected.x, corrected.control, last.tangent, last.controlSlope);
  if (!node) return { outcome: 'failed', h: h * 0.9 };
  const turn = cosine(context, last, node);
  if (turn < TURN && h > 1e-4) return { outcome: 'failed', h };
  return { outcome: 'ok', node, h, easy: corrected.steps <= 3 && turn > Math.cos(0.12) };
}

function cosine(context: BranchContext, a: Node, b: Node): number {
  let dot = 0;
  for (let i = 0; i < a.x.length; i++) dot += (a.tangent[i]! * b.tangent[i]!) / a.scale[i]! ** 2;
  const c = dot / a.x.length + (a.controlSlope * b.controlSlope) / context.width ** 2;
  return c / context.length(b.tangent, b.controlSlope, a.scale);
}

/**
 * Newton back to the branch within the plane across (`dx`, `dControl`). Converged: a scaled correction
 * below 1e-12, or at the rounding floor. At most 12 steps.
 */
export function correct(
  context: BranchContext,
  x0: Float64Array,
  control0: number,
  dx: Float64Array,
  dControl: number,
  scale: Float64Array,
): { x: Float64Array; control: number; steps: number } | null {
  const n = x0.length;
  const x = Float64Array.from(x0);
  let control = control0;
  let last = Number.POSITIVE_INFINITY;
  const step = new Float64Array(n + 1);
  for (let steps = 1; steps <= 12; steps++) {
    if (!context.problem.linearise(x, control)) return null;
    const lu = luFactor(borderedJacobian(context, scale, dx, dControl), n + 1);
    if (lu.outcome === 'singular') return null;
    for (let i = 0; i < n; i++) step[i] = -context.problem.f[i]!;
    step[n] = 0;
    luSolve(lu, step);
    let size = 0;
    for (let i = 0; i <= n; i++) size = Math.max(size, Math.abs(step[i]!));
    if (!Number.isFinite(size) || (steps > 2 && size > last)) {
      if (!(size < 1e-9)) return null;
    }
    for (let i = 0; i < n; i++) x[i] = x[i]! + step[i]! * scale[i]!;
    control += step[n]! * context.width;
    if (size < 1e-12 || (size < 1e-9 && size > last / 4)) return { x, control, steps };
    last = size;
  }
  return null;
}

/** The branch point exactly at `control`, between two nodes. */
function endNode(context: BranchContext, a: Node, b: Node, control: number): Node | null {
  const share = (control - a.control) / (b.control - a.control);
  const x = a.x.map((v, i) => v + share * (b.x[i]! - v));
  const scale = stateScale(x, Float64Array.from(context.seen));
  // Physical range is judged by the caller's rule only between nodes; here Newton must merely stay near.
  const outcome = newton(context.problem, x, control, Float64Array.from(context.seen), 20);
  if (outcome !== 'converged') return null;
  const near = x.map((v, i) => v - (a.x[i]! + share * (b.x[i]! - a.x[i]!)));
  if (scaledSize(near, scale) > 0.5 * context.largestStep * Math.sqrt(x.length)) return null;
  return makeNode(context, x, control, a.tangent, a.controlSlope);
}

function negativeVariable(context: BranchContext, node: Node): number | null {
  const { nonnegative } = context.problem.system;
  for (let i = 0; i < node.x.length; i++) {
    if (nonnegative[i] && node.x[i]! < -1e-9 * node.scale[i]!) return i;
  }
  return null;
}

/** The branch point between two neighbours, about half-way. */
export function midNode(context: BranchContext, a: Node, b: Node): Node | null {
  const n = a.x.length;
  const x = new Float64Array(n);
  const dx = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    x[i] = (a.x[i]! + b.x[i]!) / 2;
    dx[i] = b.x[i]! - a.x[i]!;
  }
  const control = (a.control + b.control) / 2;
  const dControl = b.control - a.control;
  const size = context.length(dx, dControl, a.scale);
  for (let i = 0; i < n; i++) dx[i] = dx[i]! / size;
  const point = correct(context, x, control, dx, dControl / size, a.scale);
  if (!point) return null;
  return makeNode(context, point.x, point.control, dx, dControl / size);
}
