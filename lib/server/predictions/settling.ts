import type { Branch, Control, PredictAnswer } from '@/lib/contracts';

type Onset = PredictAnswer['onsets'][number];

/** Time constants to wait: 95 % and 99 % of a disturbance gone, −ln 0.05 = 3.00 and −ln 0.01 = 4.61. */
const ENOUGH = 3;
const AMPLE = 4.6;
/** A sustained oscillation counts as grown from 1 % to 50 % of its amplitude: ln 50 time constants. */
const GROWN = Math.log(50);

/** How long a level near an onset needs; times in the model's unit. */
export type SettlingRow = {
  control: number;
  side: 'steady' | 'oscillating';
  /** real part of the leading root, 1/time */
  growthRate: number;
  /** steady: 3 to 4.6 time constants; oscillating: once the time to grow from 1 to 50 % */
  from: number;
  to: number;
};

/** Distances from the onset at which waiting is stated, in half-widths of its band. */
const DISTANCES = [2, 1, 0.5];
/** Share of the control range that stands for the half-width where there is no band. */
const NO_BAND_SHARE = 0.05;

/**
 * The growth rate of the branch at a control value, linear between its points. Null where the branch
 * does not pass or passes more than once, since then no one rate belongs to the value.
 */
export function growthRateAt(branch: Branch, control: number): number | null {
  const found: number[] = [];
  for (let i = 1; i < branch.control.length; i += 1) {
    const [a, b] = [branch.control[i - 1]!, branch.control[i]!];
    // A point shared by two pieces counts with the first of them.
    if (a === b || (control === a && i > 1)) continue;
    if (control < Math.min(a, b) || control > Math.max(a, b)) continue;
    const share = (control - a) / (b - a);
    const [ra, rb] = [branch.growthRate[i - 1]!, branch.growthRate[i]!];
    found.push(ra + share * (rb - ra));
  }
  return found.length === 1 ? found[0]! : null;
}

/** Waiting times at a few levels on both sides of an onset, in ascending order of the control. */
export function settlingNear(onset: Onset, control: Control, branch: Branch): SettlingRow[] {
  const half = onset.spread ? (onset.spread.high - onset.spread.low) / 2 : 0;
  const unit = half > 0 ? half : NO_BAND_SHARE * (control.to - control.from);
  const places = DISTANCES.flatMap((d) => [onset.value - d * unit, onset.value + d * unit]);
  return places
    .filter((v) => v >= control.from && v <= control.to)
    .sort((a, b) => a - b)
    .flatMap((value): SettlingRow[] => {
      const growthRate = growthRateAt(branch, value) ?? onset.growthSlope * (value - onset.value);
      if (!(Math.abs(growthRate) > 0)) return [];
      const tau = 1 / Math.abs(growthRate);
      const steady = growthRate < 0;
      const side = steady ? 'steady' : 'oscillating';
      const [from, to] = steady ? [ENOUGH * tau, AMPLE * tau] : [GROWN * tau, GROWN * tau];
      return [{ control: value, side, growthRate, from, to }];
    });
}
