/** States and slopes beyond this count as having left the finite range. */
const LARGEST = 1e120;

export function finite(list: Float64Array): boolean {
  for (let i = 0; i < list.length; i += 1) if (!(Math.abs(list[i]!) <= LARGEST)) return false;
  return true;
}

/** The variable that most plausibly ran away: too large already, or else changing fastest for its size. */
export function runaway(x: Float64Array, slope: Float64Array): number {
  let variable = 0;
  let worst = -1;
  for (let i = 0; i < x.length; i += 1) {
    const size = Math.abs(x[i]!);
    const score = size > LARGEST ? Number.POSITIVE_INFINITY : Math.abs(slope[i]!) / (size + 1e-300);
    if (score <= worst) continue;
    worst = score;
    variable = i;
  }
  return variable;
}
