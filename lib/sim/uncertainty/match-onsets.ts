import { type Onset, sideOf } from '../onset/scan';

type Placed = Pick<Onset, 'control' | 'growthSlope'>;

/**
 * Values of a draw's onsets (sorted by control) in the order of the nominal ones: the k-th onset of a side
 * goes with the k-th nominal onset of that side; null where there is none.
 */
export function matchOnsets(
  nominal: readonly Placed[],
  drawn: readonly Placed[],
): (number | null)[] {
  const queue = { above: [] as number[], below: [] as number[] };
  for (const o of drawn) queue[sideOf(o)].push(o.control);
  const next = { above: 0, below: 0 };
  return nominal.map((o) => {
    const side = sideOf(o);
    const value = queue[side][next[side]];
    next[side] += 1;
    return value ?? null;
  });
}
