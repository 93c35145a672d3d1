import type { PredictAnswer } from '@/lib/contracts';
import type { Outlook } from './outlook';
import { outlookAt } from './outlook';
import type { CadenceInput, LevelCadence } from './plan-cadence';
import { planCadence } from './plan-cadence';

export type LevelCadenceInput = Omit<CadenceInput, 'growthRate' | 'period' | 'noiseShare'> & {
  answer: Pick<PredictAnswer, 'branch' | 'cycles' | 'onsets'>;
  /** UCUM code of the model's time. */
  timeUnit: string;
  /** Control value that the level's dose gives. */
  control: number;
  readouts: readonly { symbol: string; noiseSd?: number }[];
  /** Share by which the period may differ across draws. */
  periodSpread?: number;
  /** Amplitude that a nudge gives each readout on the steady side, where it is known. */
  nudge?: { [readout: string]: number };
};

/** Noise over amplitude of the readout that shows the rhythm best; undefined where unknown. */
function noiseShareOf(
  amplitude: Outlook['amplitude'],
  readouts: LevelCadenceInput['readouts'],
): number | undefined {
  const shares = readouts.flatMap(({ symbol, noiseSd }) => {
    const size = amplitude?.[symbol];
    return noiseSd && size && size > 0 ? [noiseSd / size] : [];
  });
  return shares.length > 0 ? Math.min(...shares) : undefined;
}

/** `planCadence` for one level of a study, from its prediction: settle, record, interval. */
export function levelCadence(input: LevelCadenceInput): LevelCadence {
  const { answer, timeUnit, control, readouts, periodSpread, nudge, ...limits } = input;
  const outlook = outlookAt(answer, control, timeUnit, periodSpread);
  const noiseShare = noiseShareOf(outlook.amplitude ?? nudge ?? null, readouts);
  return planCadence({
    ...limits,
    growthRate: outlook.growthRate,
    period: outlook.period,
    ...(noiseShare === undefined ? {} : { noiseShare }),
  });
}
