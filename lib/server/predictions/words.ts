import type { Control, PredictAnswer, PredictedOnset } from '@/lib/contracts';
import {
  figure,
  fineDecimalsFor,
  fixed,
  modelTimeText,
  rangeText,
  unitText,
  withUnit,
} from '@/lib/format';

/** An onset with its band: "0.151 /d (0.112–0.208)"; the value alone where nothing was drawn. */
export function onsetText(onset: PredictedOnset, unit: string): string {
  const { spread, value } = onset;
  if (!spread || !(spread.high > spread.low)) return withUnit(figure(value), unit);
  const decimals = Math.max(0, fineDecimalsFor((spread.high - spread.low) / 2));
  const band = rangeText(spread.low, spread.high, decimals);
  return `${withUnit(fixed(value, decimals), unit)} (${band})`;
}

type Words = {
  answer: PredictAnswer;
  control: Control;
  unit: string;
  timeUnit: string;
  /** name of the control parameter, said where no unit tells what a figure is */
  label?: string;
};

/** A name as the head of a column: "pump rate" becomes "Pump rate"; "pH" stays. */
export const headText = (name: string): string =>
  /^[a-zà-ÿ][a-zà-ÿ ]/.test(name) ? name.charAt(0).toUpperCase() + name.slice(1) : name;

const listed = (parts: string[]) =>
  parts.length < 2 ? parts.join('') : `${parts.slice(0, -1).join(', ')} and ${parts.at(-1)}`;

/** What a prediction says, in one sentence. */
export function predictionSentence({ answer, control, unit, timeUnit, label }: Words): string {
  const [first, second, ...more] = answer.onsets;
  const name = !unitText(unit) && label ? `${label} ` : '';
  if (!first) {
    return `No onset between ${name}${figure(control.from)} and ${withUnit(figure(control.to), unit)}.`;
  }
  const period = (onset: PredictedOnset) => modelTimeText(onset.period, timeUnit, 2);
  if (!second) {
    const at = `${name}${onsetText(first, unit)}, with a period of ${period(first)}.`;
    return first.oscillates === 'above' ? `Begins to oscillate at ${at}` : `Oscillates below ${at}`;
  }
  const window = first.oscillates === 'above' && second.oscillates === 'below';
  if (more.length === 0 && window) {
    return `Oscillates from ${name}${onsetText(first, unit)} to ${onsetText(second, unit)}, with periods of ${period(first)} and ${period(second)} at the ends.`;
  }
  const all = answer.onsets.map((o) => `${onsetText(o, unit)} (oscillates ${o.oscillates})`);
  return `${answer.onsets.length} onsets: ${listed(all)}.`;
}

/** Whether an oscillation begins small or jumps, and what that means at the bench. */
export function criticalityWords(onset: PredictedOnset, unit: string): string {
  switch (onset.criticality) {
    case 'supercritical':
      return 'Gentle: the amplitude grows from zero, so just past the onset the oscillation is small.';
    case 'subcritical': {
      const jump = 'Abrupt: the oscillation jumps to its full size';
      if (!onset.coexistence) return `${jump}, and the way up and the way down may differ.`;
      const { from, to } = onset.coexistence;
      return `${jump}. From ${figure(from)} to ${withUnit(figure(to), unit)} the steady state and a large oscillation are both stable: expect the way up and the way down to differ.`;
    }
    case 'degenerate':
      return 'Whether it is gentle or abrupt cannot be told from this model.';
  }
}

export const criticalityWord = {
  supercritical: 'gentle',
  subcritical: 'abrupt',
  degenerate: 'cannot tell',
} as const satisfies Record<PredictedOnset['criticality'], string>;

const MINUTES: Record<string, number> = { ms: 1 / 60_000, s: 1 / 60, min: 1, h: 60, d: 1440 };

/** A span of model time in the largest unit that it fills twice: "35–53 h", "46 d". */
export function waitText(from: number, to: number, timeUnit: string): string {
  const own = MINUTES[timeUnit];
  const fitting = Object.entries(MINUTES).filter(([, size]) => own && (to * own) / size >= 2);
  const [unit, size] = fitting.at(-1) ?? [timeUnit, own ?? 1];
  const scale = (own ?? 1) / size;
  const [low, high] = [figure(from * scale, 2), figure(to * scale, 2)];
  return withUnit(low === high ? low : `${low}–${high}`, unit);
}

/** What the branch does where there is no onset. */
export function noOnsetWords({ branch }: PredictAnswer): string {
  if (branch.stable.length === 0) return 'No steady state was followed.';
  if (branch.stable.every(Boolean)) return 'The steady state is stable all along the range.';
  if (branch.stable.every((s) => !s)) return 'The steady state is unstable all along the range.';
  return 'The steady state changes its stability without an oscillation setting in.';
}

/** 5 % and 95 % quantile of the doses at which the draws place an onset; null with fewer than 2. */
export function doseBand(onset: PredictedOnset): { low: number; high: number } | null {
  const doses = (onset.spread?.doses ?? [])
    .filter((d): d is number => d !== null)
    .sort((a, b) => a - b);
  if (doses.length < 2) return null;
  const at = (share: number) => {
    const place = share * (doses.length - 1);
    const low = Math.floor(place);
    const a = doses[low] ?? 0;
    return a + (place - low) * ((doses[low + 1] ?? a) - a);
  };
  return { low: at(0.05), high: at(0.95) };
}
