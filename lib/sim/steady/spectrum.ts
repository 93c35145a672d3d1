import { eigenvalues } from '../linalg/eigenvalues';
import type { Characteristic } from './characteristic';
import { delayRoots } from './delay-spectrum';
import type { Problem } from './problem';

/** A characteristic root with im ≥ 0; im > 0 stands for a conjugate pair. */
export interface Root {
  readonly re: number;
  readonly im: number;
}

export interface Spectrum {
  readonly outcome: 'ok' | 'uncertain';
  /** By falling real part; all of them for an ordinary system, the leading ones with delays. */
  readonly roots: readonly Root[];
  /** Number of unstable dimensions (a pair counts two). */
  readonly unstable: number;
  /** Real parts below this in size are zero to rounding. */
  readonly tolerance: number;
  /** Size of the linearisation: every unstable root lies within it. */
  readonly norm: number;
}

/**
 * The spectrum at the problem's present linearisation. Delays that are zero fold into A, so that a delay
 * of zero is an ordinary system.
 */
export function spectrum(problem: Problem, work: Characteristic, scale: Float64Array): Spectrum {
  const delayed = problem.K > 0 && problem.tau.some((t) => t > 0);
  if (delayed) {
    const { outcome, roots, norm } = delayRoots(problem, work, scale);
    return summarise(outcome, roots, 1e-13 * norm, norm);
  }
  const e = eigenvalues(Float64Array.from(problem.total), problem.n);
  const roots: Root[] = [];
  for (let i = 0; i < problem.n; i++) {
    if (e.im[i]! >= 0) roots.push({ re: e.re[i]!, im: e.im[i]! });
  }
  roots.sort((p, q) => q.re - p.re);
  return summarise(e.outcome === 'ok' ? 'ok' : 'uncertain', roots, 4e-15 * e.norm, e.norm);
}

function summarise(
  outcome: 'ok' | 'uncertain',
  roots: readonly Root[],
  tolerance: number,
  norm: number,
): Spectrum {
  let unstable = 0;
  for (const r of roots) if (r.re > tolerance) unstable += r.im > 0 ? 2 : 1;
  return { outcome, roots, unstable, tolerance, norm };
}
