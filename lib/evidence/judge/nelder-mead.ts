export type Minimum = {
  outcome: 'converged' | 'cap-reached';
  point: number[];
  value: number;
};

/**
 * Downhill simplex (Nelder & Mead 1965, Comput J 7:308). `objective` may return Infinity outside
 * its domain. Stops when the simplex's values agree within `tolerance` (absolute), or at `cap`
 * evaluations.
 */
export function nelderMead(
  objective: (p: number[]) => number,
  start: number[],
  steps: number[],
  tolerance = 1e-4,
  cap = 160,
): Minimum {
  const n = start.length;
  const simplex = [start, ...steps.map((s, j) => start.map((v, i) => (i === j ? v + s : v)))].map(
    (point) => ({ point, value: objective(point) }),
  );
  let evaluations = n + 1;
  const along = (centre: number[], worst: number[], factor: number) => {
    const point = centre.map((c, i) => c + factor * (c - worst[i]!));
    evaluations++;
    return { point, value: objective(point) };
  };
  while (evaluations < cap) {
    simplex.sort((a, b) => a.value - b.value);
    const best = simplex[0]!;
    const worst = simplex[n]!;
    if (worst.value - best.value <= tolerance) {
      return { outcome: 'converged', point: best.point, value: best.value };
    }
    const centre = start.map(
      (_, i) => simplex.slice(0, n).reduce((s, v) => s + v.point[i]!, 0) / n,
    );
    const reflected = along(centre, worst.point, 1);
    if (reflected.value < best.value) {
      const expanded = along(centre, worst.point, 2);
      simplex[n] = expanded.value < reflected.value ? expanded : reflected;
    } else if (reflected.value < simplex[n - 1]!.value) {
      simplex[n] = reflected;
    } else {
      const contracted = along(centre, worst.point, reflected.value < worst.value ? 0.5 : -0.5);
      if (contracted.value < Math.min(worst.value, reflected.value)) {
        simplex[n] = contracted;
      } else {
        for (let k = 1; k <= n; k++) {
          const point = simplex[k]!.point.map((v, i) => (v + best.point[i]!) / 2);
          simplex[k] = { point, value: objective(point) };
          evaluations++;
        }
      }
    }
  }
  simplex.sort((a, b) => a.value - b.value);
  return { outcome: 'cap-reached', point: simplex[0]!.point, value: simplex[0]!.value };
}
