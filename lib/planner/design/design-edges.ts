import type { DesignAnswer, DesignedLevel, DesignRequest, Note } from '@/lib/contracts';
import type { AnchorSide, Placed } from './anchors';
import { anchorsBetween, anchorsOf } from './anchors';
import { equalSpacing, expectationOf, refuseStepInRandomOrder } from './design';
import { limitNotes } from './notes';
import type { OnsetTask } from './onset-levels';
import { onsetLevels, onsetTask } from './onset-levels';
import { priorOf } from './prior';
import { rowsOf } from './rows';
import type { Settable } from './settable';
import { settableSets } from './settable';

/** What all edges of one series have in common; it overrides the like-named parts of each edge. */
export type SharedDesign = Pick<DesignRequest, 'range' | 'order' | 'limits' | 'anchors' | 'seed'>;
/** `edge`: which of the requests an onset level serves, by its place in the list; else null. */
export type EdgeLevel = DesignedLevel & { edge: number | null };
export type EdgesAnswer = {
  levels: EdgeLevel[];
  /** In the order of the requests. */
  expected: DesignAnswer['expected'][];
  notes: Note[];
};

type Edge = { index: number; request: DesignRequest; task: OnsetTask; equal: number[] };
type Found = { set: Settable; doses: number[][]; variances: number[]; score: number };

/** Where one edge's part of the range ends and the next begins, by distance in prior sd. */
function borders(edges: Edge[]): number[] {
  return edges.slice(1).map((upper, i) => {
    const a = edges[i]!.task.prior;
    const b = upper.task.prior;
    const share = a.sd + b.sd > 0 ? a.sd / (a.sd + b.sd) : 0.5;
    return a.mean + (b.mean - a.mean) * share;
  });
}

/** The part of a settable set that lies within [low, high]; null when nothing does. */
function partOf(set: Settable, low: number, high: number): Settable | null {
  const [from, to] = [Math.max(set.low, low), Math.min(set.high, high)];
  if (from > to) return null;
  if (set.grid === null) return { ...set, low: from, high: to };
  const grid = set.grid.filter((d) => d >= from && d <= to);
  return grid.length === 0 ? null : { ...set, low: grid[0]!, high: grid.at(-1)!, grid };
}

function levelsIn(set: Settable, edges: Edge[], cuts: number[]): Found {
  const found: Found = { set, doses: [], variances: [], score: 0 };
  edges.forEach((edge, i) => {
    const half = edge.task.apart / 2;
    const low = i === 0 ? -Infinity : cuts[i - 1]! + half;
    const high = i === edges.length - 1 ? Infinity : cuts[i]! - half;
    const part = partOf(set, low, high);
    const whole = edge.task.prior.sd ** 2;
    const chosen = part ? onsetLevels(edge.task, part, edge.equal) : { doses: [], variance: whole };
    found.doses.push(chosen.doses);
    found.variances.push(chosen.variance);
    found.score += whole > 0 ? chosen.variance / whole : 0;
  });
  return found;
}

/** Baselines where the system is steady, far-side levels where it oscillates, each shared once. */
function sharedAnchors(found: Found, edges: Edge[], shared: SharedDesign) {
  const apart = shared.limits?.smallestStep ?? 0;
  const side = (oscillating: boolean): Pick<AnchorSide, 'count' | 'purpose'> =>
    oscillating
      ? { count: shared.anchors?.above ?? 1, purpose: 'far side' }
      : { count: shared.anchors?.below ?? 1, purpose: 'baseline' };
  const filled = edges.flatMap((edge, i) =>
    found.doses[i]!.length > 0
      ? [{ above: edge.task.oscillates === 'above', doses: found.doses[i]! }]
      : [],
  );
  const [first, last] = [filled[0]!, filled.at(-1)!];
  const lower = { end: shared.range[0], next: first.doses[0]!, ...side(!first.above) };
  const upper = { end: shared.range[1], next: last.doses.at(-1)!, ...side(last.above) };
  const parts = [anchorsOf(lower, found.set, apart), anchorsOf(upper, found.set, apart)];
  for (let i = 0; i + 1 < filled.length; i += 1) {
    const gap = [filled[i]!.doses.at(-1)!, filled[i + 1]!.doses[0]!] as const;
    parts.push(anchorsBetween(gap, side(filled[i]!.above), found.set, apart));
  }
  return { placed: parts.flatMap((p) => p.placed), notes: parts.flatMap((p) => p.notes) };
}

/** The dose in force before: as stated, the steady end of the range, or steady ground between. */
function startingDose(shared: SharedDesign, edges: Edge[], cuts: number[]): number {
  if (shared.limits?.start !== undefined) return shared.limits.start;
  if (edges[0]?.task.oscillates !== 'below') return shared.range[0];
  if (edges.at(-1)!.task.oscillates === 'below') return shared.range[1];
  return cuts[0]!;
}

function unique(notes: Note[]): Note[] {
  return notes.filter((n, i) => notes.findIndex((m) => m.text === n.text) === i);
}

/**
 * One series for several onsets of one control parameter (the two edges of an oscillating window,
 * say): the onset levels of each edge are chosen by themselves within its own part of the range;
 * anchors are shared, with one set between neighbouring edges; order, ceiling, grid and largest
 * rising step hold for the whole list. `levels` and `replicates` of each request count for its edge;
 * the rows take the largest `replicates`.
 */
export function designEdges(requests: readonly DesignRequest[], shared: SharedDesign): EdgesAnswer {
  const whole = requests.map((r) => ({ ...r, ...shared }));
  for (const request of whole) refuseStepInRandomOrder(request);
  const edges: Edge[] = whole
    .map((request, index) => {
      const task = onsetTask(priorOf(request), request);
      return { index, request, task, equal: equalSpacing(shared.range, request.levels) };
    })
    .sort((a, b) => a.task.prior.mean - b.task.prior.mean);
  const cuts = borders(edges);
  const limits = { ...shared.limits, start: startingDose(shared, edges, cuts) };
  const sets = settableSets({ ...shared, limits, oscillates: 'above' });
  const candidates = sets.map((set) => levelsIn(set, edges, cuts));
  const best = candidates.reduce<Found | null>((a, b) => (a && a.score <= b.score ? a : b), null);
  const expected = whole.map((_, index) => {
    const i = edges.findIndex((edge) => edge.index === index);
    const { task, equal } = edges[i]!;
    return expectationOf(task, best?.variances[i] ?? task.prior.sd ** 2, equal);
  });
  const { levels, notes } = mergedRows(best, edges, { ...shared, limits });
  const own = edges.flatMap((edge, i) =>
    limitNotes(
      { ...edge.request, limits },
      edge.task.prior,
      best?.doses[i] ?? [],
      levels,
      sets.length,
    ),
  );
  return { levels, expected, notes: unique([...own, ...notes]) };
}

function mergedRows(best: Found | null, edges: Edge[], shared: SharedDesign) {
  if (best === null || best.doses.every((doses) => doses.length === 0)) {
    return { levels: [] as EdgeLevel[], notes: [] as Note[] };
  }
  const anchors = sharedAnchors(best, edges, shared);
  const serves = new Map<number, number>();
  best.doses.forEach((doses, i) => {
    for (const dose of doses) serves.set(dose, edges[i]!.index);
  });
  const onset = [...serves.keys()].map((dose): Placed => ({ dose, purpose: 'onset' }));
  const rows = rowsOf(
    [...anchors.placed, ...onset],
    {
      order: shared.order,
      start: shared.limits?.start ?? shared.range[0],
      largestStep: shared.limits?.largestStep,
      path: best.set.path,
      seed: shared.seed,
    },
    Math.max(...edges.map((edge) => edge.request.replicates)),
  );
  const levels = rows.map(
    (row): EdgeLevel => ({
      ...row,
      edge: row.purpose === 'onset' ? (serves.get(row.dose) ?? null) : null,
    }),
  );
  return { levels, notes: anchors.notes };
}
