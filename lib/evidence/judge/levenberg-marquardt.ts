import { dot, solveCholesky } from './least-squares';

export type LmResult = {
  outcome: 'converged' | 'cap-reached' | 'failed';
  parameters: number[];
  rss: number;
  iterations: number;
};

export type LmOptions = { tolerance?: number; cap?: number };

/**
 * Nonlinear least squares (Levenberg 1944; Marquardt 1963, J SIAM 11:431) with central-difference
 * Jacobian and damping scaled by the diagonal of JᵀJ. `residuals` returns null outside its domain.
 * Stops when a step lowers the sum of squares by less than `tolerance` of itself (default 1e-12)
 * or after `cap` steps (default 200).
 */
export function levenbergMarquardt(
  residuals: (p: number[]) => Float64Array | null,
  start: number[],
  options: LmOptions = {},
): LmResult {
  const { tolerance = 1e-12, cap = 200 } = options;
  let parameters = [...start];
  let current = residuals(parameters);
  if (current === null) return { outcome: 'failed', parameters, rss: Infinity, iterations: 0 };
  let rss = dot(current, current);
  let damping = 1e-3;
  for (let iteration = 1; iteration <= cap; iteration++) {
    const jacobian = differences(residuals, parameters);
    if (jacobian === null) return { outcome: 'failed', parameters, rss, iterations: iteration };
    const gradient = jacobian.map((column) => dot(column, current!));
    const normal = jacobian.map((a) => jacobian.map((b) => dot(a, b)));
    let improved = false;
    while (damping < 1e12) {
      const trial = step(normal, gradient, parameters, damping);
      const next = trial && residuals(trial);
      const nextRss = next ? dot(next, next) : Infinity;
      if (trial && next && nextRss < rss) {
        const gain = rss - nextRss;
        parameters = trial;
        current = next;
        improved = gain > tolerance * rss;
        rss = nextRss;
        damping = Math.max(damping / 9, 1e-12);
        break;
      }
      damping *= 11;
    }
    if (!improved) return { outcome: 'converged', parameters, rss, iterations: iteration };
  }
  return { outcome: 'cap-reached', parameters, rss, iterations: cap };
}

function step(
  normal: number[][],
  gradient: number[],
  parameters: number[],
  damping: number,
): number[] | null {
  const damped = normal.map((row, i) =>
    row.map((v, j) => (i === j ? v * (1 + damping) + 1e-300 : v)),
  );
  const delta = solveCholesky(damped, gradient);
  return delta && parameters.map((p, i) => p - delta[i]!);
}

function differences(
  residuals: (p: number[]) => Float64Array | null,
  parameters: number[],
): Float64Array[] | null {
  const columns: Float64Array[] = [];
  for (let j = 0; j < parameters.length; j++) {
    const h = 6e-6 * Math.max(Math.abs(parameters[j]!), 1e-2);
    const up = residuals(parameters.map((p, i) => (i === j ? p + h : p)));
    const down = residuals(parameters.map((p, i) => (i === j ? p - h : p)));
    if (up === null || down === null) return null;
    columns.push(up.map((v, i) => (v - down[i]!) / (2 * h)));
  }
  return columns;
}
