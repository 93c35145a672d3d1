import type { Note } from '@/lib/contracts';
import { EngineError } from '@/lib/contracts';
import type { CompiledSystem } from '../equations/types';
import { type FollowedBranch, followBranch } from '../steady/branch';
import { type Equilibrium, findEquilibrium } from '../steady/equilibrium';
import { BranchContext } from '../steady/node';
import { Problem } from '../steady/problem';
import { refineEvent, type Scan, scanBranch } from './scan';

export interface Analysis {
  readonly context: BranchContext;
  readonly equilibrium: Equilibrium;
  readonly branch: FollowedBranch;
  readonly scan: Scan;
}

export interface Range {
  readonly controlIndex: number;
  readonly from: number;
  readonly to: number;
}

/**
 * The whole search for one set of parameters: equilibrium at `from`, branch, onsets.
 * `guess` is where the equilibrium is looked for first.
 *
 * @throws EngineError 'no-steady-state'
 */
export function analyse(
  system: CompiledSystem,
  parameters: Float64Array,
  range: Range,
  guess: Float64Array,
  options: { largestStep?: number; cancelled?: () => boolean } = {},
): Analysis {
  const problem = new Problem(system, parameters, range.controlIndex);
  const context = new BranchContext(
    problem,
    range.from,
    range.to,
    system.start,
    options.largestStep,
  );
  const equilibrium = findEquilibrium(problem, guess, range.from, context.seen);
  const branch = followBranch(context, equilibrium.x, options.cancelled);
  if (!branch) {
    throw new EngineError(
      'no-steady-state',
      `the steady state at ${system.parameters[range.controlIndex]} = ${range.from} is not isolated (its Jacobian is singular there): move the start of the range a little`,
      'control.from',
    );
  }
  return { context, equilibrium, branch, scan: scanBranch(context, branch.nodes) };
}

/** What a reader of the branch must be told. */
export function analysisNotes(analysis: Analysis): Note[] {
  const { branch, scan, equilibrium, context } = analysis;
  const notes: Note[] = [];
  const symbol = context.problem.system.parameters[context.problem.controlIndex]!;
  const where = (v: number) => `${symbol} = ${Number(v.toPrecision(6))}`;
  if (equilibrium.route !== 'newton') {
    const how =
      equilibrium.route === 'flow'
        ? 'the one to which the system settles from the start values'
        : 'found from other guesses than the start values';
    notes.push({
      code: 'relaxed-start',
      text: `the steady state at ${where(context.from)} is ${how}`,
    });
  }
  const first = branch.nodes[0]!.spectrum;
  if (first.unstable > 0 && !scan.onsets.some((o) => o.control === context.from)) {
    notes.push({
      code: 'unstable-from-start',
      text: `the steady state is unstable already at ${where(context.from)}, with ${first.unstable} unstable dimension${first.unstable > 1 ? 's' : ''}`,
    });
  }
  notes.push(...eventNotes(analysis, where), ...doubtNotes(analysis, where));
  for (const control of neutralSaddles(analysis)) {
    notes.push({
      code: 'neutral-saddle',
      text: `two real eigenvalues sum to zero near ${where(control)}; no oscillation begins there`,
    });
  }
  for (const o of scan.beyond) {
    notes.push({
      code: 'onset-beyond-range',
      text: `an onset lies just outside the range, at ${where(o.control)}`,
    });
  }
  notes.push(...branch.notes);
  if (scan.onsets.length === 0) {
    notes.push({
      code: 'no-onset',
      text: `no onset of oscillation between ${where(context.from)} and ${Number(context.to.toPrecision(6))} on this branch`,
    });
  }
  return notes;
}

/** Where stability could not be told for certain; such places must not pass for steady ones. */
function doubtNotes({ scan }: Analysis, where: (v: number) => string): Note[] {
  const notes: Note[] = [];
  const unresolved = scan.events.find((e) => e.kind === 'unresolved');
  if (unresolved) {
    notes.push({
      code: 'branch-incomplete',
      text: `stability changes near ${where(unresolved.control)} in a way that could not be resolved`,
    });
  }
  const vague = scan.nodes.find((n) => n.spectrum.outcome === 'uncertain');
  if (vague) {
    notes.push({
      code: 'branch-incomplete',
      text: `from ${where(vague.control)} on the delays are so long that the leading roots are only approximate`,
    });
  }
  return notes;
}

/** Folds and real crossings, each refined. */
function eventNotes({ scan, context }: Analysis, where: (v: number) => string): Note[] {
  const notes: Note[] = [];
  for (const event of scan.events) {
    if (event.kind === 'fold') {
      notes.push({
        code: 'fold',
        text: `the branch of steady states turns round (fold) at ${where(refineEvent(context, event))}`,
      });
    } else if (event.kind === 'real-crossing') {
      notes.push({
        code: 'real-eigenvalue-crossing',
        text: `a real eigenvalue crosses zero at ${where(refineEvent(context, event))}: the steady state changes stability without an oscillation`,
      });
    }
  }
  return notes;
}

/** Places where the one positive real root and the nearest negative real root cancel. */
function neutralSaddles({ scan }: Analysis): number[] {
  const sums = scan.nodes.map(({ spectrum }) => {
    const real = spectrum.roots.filter((r) => r.im === 0);
    const up = real.filter((r) => r.re > spectrum.tolerance);
    const down = real.find((r) => r.re < -spectrum.tolerance);
    return spectrum.unstable === 1 && up.length === 1 && down ? up[0]!.re + down.re : null;
  });
  const out: number[] = [];
  for (let i = 1; i < sums.length; i++) {
    const a = sums[i - 1];
    const b = sums[i];
    if (a != null && b != null && a !== 0 && a * b <= 0) {
      const [p, q] = [scan.nodes[i - 1]!, scan.nodes[i]!];
      out.push(p.control + (a / (a - b)) * (q.control - p.control));
    }
  }
  return out;
}
