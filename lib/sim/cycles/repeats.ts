/** One upward crossing of the section, and what was seen since the one before. */
export interface Crossing {
  readonly time: number;
  readonly state: Float64Array;
  readonly swing: Float64Array;
  readonly readouts: readonly { min: number; max: number }[];
}

const ACCURACY = 1e-3;
const SAME = 1e-6;
const MOST_CROSSINGS = 8;
const BEFORE_MULTIPLES = 24;

/**
 * How many crossings make one cycle (1, or more for a course with several bumps or doubled periods), or null while the
 * cycles do not repeat yet. The distance between states m crossings apart shrinks by a factor ρ each time; what is
 * still missing is distance · ρ/(1 − ρ), and must lie below `accuracy` of the swing.
 */
export function repeats(crossings: readonly Crossing[], accuracy = ACCURACY): number | null {
  const last = crossings.length - 1;
  for (let m = 1; m <= MOST_CROSSINGS && last - 2 * m >= 2; m += 1) {
    if (m > 1 && last < BEFORE_MULTIPLES) break;
    const now = distance(crossings, last, m);
    if (now < SAME) return m;
    const before = distance(crossings, last - m, m);
    const ratio = now / before;
    const multiple = m === 1 ? 1 : 0.1;
    if (
      ratio < 1 &&
      now < 10 * multiple * accuracy &&
      (now * ratio) / (1 - ratio) < multiple * accuracy
    ) {
      return m;
    }
  }
  return null;
}

/**
 * Largest difference between crossings j and j − m: of states and of swings over the swings of the last m cycles, and of
 * the times since the crossing before. (A system of one variable with a delay is always in the same state at a crossing.)
 */
function distance(crossings: readonly Crossing[], j: number, m: number): number {
  const a = crossings[j]!;
  const b = crossings[j - m]!;
  const interval = a.time - crossings[j - 1]!.time;
  let worst = Math.abs(interval - (b.time - crossings[j - m - 1]!.time)) / interval;
  for (let i = 0; i < a.state.length; i += 1) {
    let swing = 0;
    for (let k = 0; k < m; k += 1) {
      swing = Math.max(swing, crossings[crossings.length - 1 - k]!.swing[i]!);
    }
    if (swing === 0) continue;
    worst = Math.max(worst, Math.abs(a.state[i]! - b.state[i]!) / swing);
    worst = Math.max(worst, Math.abs(a.swing[i]! - b.swing[i]!) / swing);
  }
  return worst;
}
