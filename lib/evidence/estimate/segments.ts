import type { Side } from '@/lib/contracts';
import { type Evidence, isSteady, isSustained } from './levels';

/** One change between steady and sustained along the control axis, and the evidence that concerns it. */
export type Change = { oscillates: Side; at: number; window: Evidence[] };

/** Cost of one verdict against the pattern: ln(0.95/0.05), a verdict being wrong once in twenty. */
const AGAINST = Math.log(19);
/** Cost of one change; two changes cost a little less than one verdict against the pattern. */
const CHANGE = 1.4;

/**
 * The pattern of at most two changes (steady–sustained–steady, say) that best agrees with the
 * verdicts. Each change gets the evidence up to the middle of the neighbouring stretch.
 */
export function findChanges(evidence: Evidence[]): Change[] {
  const decided = evidence.filter((e) => e.verdict !== 'undecided');
  const controls = [...new Set(decided.map((e) => e.x))];
  const steady = controls.map((x) => decided.filter((e) => e.x === x && isSteady(e)).length);
  const sustained = controls.map((x) => decided.filter((e) => e.x === x && isSustained(e)).length);
  const best = bestPattern(steady, sustained);
  const cuts = best.cuts.map((k) => (controls[k - 1]! + controls[k]!) / 2);
  return cuts.map((at, i) => {
    // A stretch of one level belongs to both of its changes.
    const nearest = { below: controls[best.cuts[i]! - 1]!, above: controls[best.cuts[i]!]! };
    const from = i > 0 ? Math.min((cuts[i - 1]! + at) / 2, nearest.below) : -Infinity;
    const to = i + 1 < cuts.length ? Math.max((at + cuts[i + 1]!) / 2, nearest.above) : Infinity;
    const sustainedBefore = (best.first + i) % 2 === 1;
    return {
      oscillates: sustainedBefore ? 'below' : 'above',
      at,
      window: evidence.filter((e) => e.x >= from && e.x <= to),
    };
  });
}

function bestPattern(steady: number[], sustained: number[]): { first: number; cuts: number[] } {
  const n = steady.length;
  const sums = [prefix(sustained), prefix(steady)];
  let best = { first: 0, cuts: [] as number[], cost: Infinity };
  const consider = (first: number, cuts: number[]) => {
    const edges = [0, ...cuts, n];
    let cost = CHANGE * cuts.length;
    for (let s = 0; s + 1 < edges.length; s++) {
      const wrong = sums[(first + s) % 2]!;
      cost += AGAINST * (wrong[edges[s + 1]!]! - wrong[edges[s]!]!);
    }
    if (cost < best.cost - 1e-9) best = { first, cuts, cost };
  };
  const positions = changePositions(steady, sustained);
  for (const first of [0, 1]) {
    consider(first, []);
    positions.forEach((a, i) => {
      consider(first, [a]);
      for (const b of positions.slice(i + 1)) consider(first, [a, b]);
    });
  }
  return best;
}

/** Only where neighbouring levels differ can a change pay; at most 400 places are tried. */
function changePositions(steady: number[], sustained: number[]): number[] {
  const positions: number[] = [];
  for (let k = 1; k < steady.length; k++) {
    const before = sustained[k - 1]! - steady[k - 1]!;
    const after = sustained[k]! - steady[k]!;
    if (Math.sign(before) !== Math.sign(after)) positions.push(k);
  }
  const every = Math.ceil(positions.length / 400);
  return positions.filter((_, i) => i % every === 0);
}

function prefix(counts: number[]): number[] {
  const sums = [0];
  for (const c of counts) sums.push(sums[sums.length - 1]! + c);
  return sums;
}

/** Control increases towards the oscillation: mirrors the axis where it oscillates below. */
export function orient(window: Evidence[], oscillates: Side): Evidence[] {
  return oscillates === 'above' ? window : window.map((e) => ({ ...e, x: -e.x })).reverse();
}
