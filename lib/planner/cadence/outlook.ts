import type { PredictAnswer } from '@/lib/contracts';
import { minutesPerUnit } from './time-unit';

/** What the prediction says of one level, in minutes. Null where it says nothing. */
export type Outlook = {
  /** Real part of the leading root, per minute; negative on the steady side. */
  growthRate: number | null;
  period: { low: number; value: number; high: number } | null;
  /** Half the swing of each readout on the stable cycle nearest to this level, where there is one. */
  amplitude: { [readout: string]: number } | null;
};

/** Neighbouring places of the branch around a control value, the more stable pair first. */
function bracketAt(
  branch: PredictAnswer['branch'],
  control: number,
): { i: number; f: number } | null {
  let best: { i: number; f: number; rate: number } | null = null;
  for (let i = 0; i + 1 < branch.control.length; i += 1) {
    const [a, b] = [branch.control[i]!, branch.control[i + 1]!];
    if (control < Math.min(a, b) || control > Math.max(a, b)) continue;
    const f = a === b ? 0 : (control - a) / (b - a);
    const rate = branch.growthRate[i]! + f * (branch.growthRate[i + 1]! - branch.growthRate[i]!);
    if (best === null || rate < best.rate) best = { i, f, rate };
  }
  return best;
}

const between = (list: readonly number[], i: number, f: number) =>
  list[i]! + f * (list[i + 1]! - list[i]!);

/** Period of the linear rhythm here; null where either end of the stretch has a real root. */
function linearPeriod(
  branch: PredictAnswer['branch'],
  at: { i: number; f: number },
): number | null {
  const low = Math.min(branch.frequency[at.i]!, branch.frequency[at.i + 1]!);
  return low > 0 ? (2 * Math.PI) / between(branch.frequency, at.i, at.f) : null;
}

/**
 * The prediction at one control value: growth rate and period by linear interpolation on the
 * branch (the stablest sheet where it folds); on the oscillating side the period of the stable
 * cycle nearest to it counts too, and where the leading root is real, the nearest onset's.
 * `periodSpread`: share by which the period may differ across draws, widening the range.
 */
export function outlookAt(
  answer: Pick<PredictAnswer, 'branch' | 'cycles' | 'onsets'>,
  control: number,
  timeUnit: string,
  periodSpread = 0.2,
): Outlook {
  const unit = minutesPerUnit(timeUnit);
  const at = bracketAt(answer.branch, control);
  const growthRate = at && between(answer.branch.growthRate, at.i, at.f);
  const distance = (other: { control: number }) => Math.abs(other.control - control);
  const cycles = answer.cycles.filter((c) => c.stable).sort((a, b) => distance(a) - distance(b));
  const oscillating = growthRate === null || growthRate >= 0;
  const cycle = oscillating ? cycles[0] : undefined;
  const onset = [...answer.onsets].sort(
    (a, b) => Math.abs(a.value - control) - Math.abs(b.value - control),
  )[0];
  const linear = at && linearPeriod(answer.branch, at);
  const found = [linear, cycle?.period].filter((p): p is number => typeof p === 'number' && p > 0);
  const periods = found.length > 0 ? found : onset ? [onset.period] : [];
  const main = cycle?.period ?? periods[0];
  return {
    growthRate: growthRate === null ? null : growthRate / unit,
    period:
      main === undefined
        ? null
        : {
            low: (Math.min(...periods) * unit) / (1 + periodSpread),
            value: main * unit,
            high: Math.max(...periods) * unit * (1 + periodSpread),
          },
    amplitude: cycle
      ? Object.fromEntries(
          Object.entries(cycle.readouts).map(([name, r]) => [name, (r.max - r.min) / 2]),
        )
      : null,
  };
}
