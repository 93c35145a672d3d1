import type { Side } from '@/lib/contracts';
import type { Analysis } from '../onset/analyse';
import { newton } from '../steady/newton';
import type { BranchContext } from '../steady/node';
import { stateScale } from '../steady/problem';
import { spectrum } from '../steady/spectrum';

export interface PlacedOnset {
  readonly value: number;
  readonly oscillates: Side;
}

/**
 * Stability that the ends of the range must show if a draw's onsets are just those given, some of them
 * outside the range. Null where sides do not alternate or nothing can be said: a full scan must decide.
 */
export function expectedEnds(
  onsets: readonly PlacedOnset[],
  from: number,
  to: number,
): { from: boolean; to: boolean } | null {
  const ordered = [...onsets].sort((a, b) => a.value - b.value);
  for (let i = 1; i < ordered.length; i++) {
    if (ordered[i]!.oscillates === ordered[i - 1]!.oscillates) return null;
  }
  const first = ordered.find((o) => o.value >= from);
  const last = ordered.findLast((o) => o.value <= to);
  const below = ordered.findLast((o) => o.value < from);
  const above = ordered.find((o) => o.value > to);
  const atFrom = first ? first.oscillates === 'above' : below && below.oscillates === 'below';
  const atTo = last ? last.oscillates === 'below' : above && above.oscillates === 'above';
  return atFrom === undefined || atTo === undefined ? null : { from: atFrom, to: atTo };
}

/**
 * Is the steady state of the context's present parameters stable at each end of the range? Newton starts
 * from the nominal branch's ends. Null where it fails, or where the nominal branch is folded or ends
 * inside the range.
 */
export function stableEnds(
  context: BranchContext,
  nominal: Analysis,
): { from: boolean; to: boolean } | null {
  const { nodes, end } = nominal.branch;
  const last = nodes[nodes.length - 1]!;
  if (end !== 'range' || last.control !== context.to) return null;
  if (nodes.some((n) => !(n.controlSlope > 0))) return null;
  const from = isStable(context, nodes[0]!.x, context.from);
  const to = isStable(context, last.x, context.to);
  return from === null || to === null ? null : { from, to };
}

function isStable(context: BranchContext, guess: Float64Array, control: number): boolean | null {
  const { problem, work } = context;
  const x = Float64Array.from(guess);
  const seen = Float64Array.from(context.seen);
  if (newton(problem, x, control, seen, 25) !== 'converged') return null;
  const scale = stateScale(x, seen);
  if (!problem.linearise(x, control)) return null;
  const found = spectrum(problem, work, scale);
  return found.outcome === 'ok' ? found.unstable === 0 : null;
}
