import type { Verdict } from '@/lib/contracts';
import type { Rhythm } from './analyse';
import { figure, plural } from './words';

/** A verdict, the growth rate's 90 % interval per record, and why. */
export type Decision = {
  verdict: Verdict;
  growth: { value: number; low: number; high: number } | null;
  reasons: string[];
};

/** Thresholds of the verdict; measured rates are in tests/evidence/verdict-rates.test.ts. */
export const THRESHOLDS = {
  /** Score over the best account without a rhythm. */
  evidence: 3,
  /** Twice the likelihood gain at which a drive by noise counts as shown. */
  driven: 6,
  /** Few cycles show a drive less clearly, so that less of it is enough to withhold "sustained". */
  drivenInFewCycles: 1.5,
  fewCycles: 7.5,
  drivenBetween: 3,
  manyCycles: 12,
  lossInFewCycles: 0.35,
  /** A sustained rhythm may lose at most this many e-foldings over the record. */
  loss: 0.5,
  /** Five cycles less the reading that would begin the sixth. */
  sustainedCycles: 4.8,
  /** A decay counts when the interval widened from 90 % to 95 % still lies below zero. */
  widen: 1.96 / 1.645,
  /** e-foldings up to which a rising size counts as unchanged, and from which as growth. */
  slightGrowth: 0.4,
  growth: 0.3,
  growthInFewCycles: 1,
  ringCycles: 8,
  ringChance: 0.005,
  ringVariation: 0.35,
} as const;

export function isDriven(r: Rhythm): boolean {
  const gain = 2 * (r.driven.logLikelihood - r.driven.undrivenLogLikelihood);
  const cycles = r.oscillation.frequency;
  if (cycles < THRESHOLDS.fewCycles) return gain > THRESHOLDS.drivenInFewCycles;
  return gain > (cycles < THRESHOLDS.manyCycles ? THRESHOLDS.drivenBetween : THRESHOLDS.driven);
}

/** Verdict on a record that holds a rhythm. */
export function decideRhythm(r: Rhythm, samplesPerCycle: number): Decision {
  const growth = { value: r.driven.growth, low: r.interval.low, high: r.interval.high };
  const cycles = r.oscillation.frequency;
  if (isDriven(r)) return decideDriven(r, growth, cycles);
  if (growth.low > 0 && growth.value > THRESHOLDS.slightGrowth)
    return decideGrowing(growth, cycles);
  const high = growth.value + THRESHOLDS.widen * (growth.high - growth.value);
  if (high < 0) return decideDecaying(growth, cycles);
  const loss = cycles < THRESHOLDS.fewCycles ? THRESHOLDS.lossInFewCycles : THRESHOLDS.loss;
  if (cycles >= THRESHOLDS.sustainedCycles && growth.low > -loss) {
    return {
      verdict: 'sustained',
      growth,
      reasons: [
        `The rhythm keeps its size over ${figure(cycles)} cycles: at most ${percent(growth.low)} of it can have been lost by the end of the record.`,
        'What is left after a regular rhythm is taken out looks like measurement noise, so it is not a rhythm kept up by noise.',
      ],
    };
  }
  const wanted = wantedCycles(r, cycles, samplesPerCycle);
  return {
    verdict: 'undecided',
    growth,
    reasons: [
      `There is a rhythm, but ${figure(cycles)} cycles do not show whether it lasts: over the record its size may have changed by a factor between ${factor(growth.low)} and ${factor(growth.high)}.`,
      `To settle it, record about ${wanted} cycles at this density.`,
    ],
  };
}

function decideDriven(
  r: Rhythm,
  growth: NonNullable<Decision['growth']>,
  cycles: number,
): Decision {
  const ring = r.ring;
  if (
    ring &&
    cycles >= THRESHOLDS.ringCycles &&
    ring.chance < THRESHOLDS.ringChance &&
    ring.variation < THRESHOLDS.ringVariation
  ) {
    const half = 1.645 * ring.slopeSd;
    const own = { value: ring.slope, low: ring.slope - half, high: ring.slope + half };
    if (own.low > -THRESHOLDS.loss && own.high > -0.1) {
      return {
        verdict: 'sustained',
        growth: own,
        reasons: [
          `The rhythm's phase wanders, but its size stays within ${percentOf(ring.variation)} over ${figure(cycles)} cycles: something pulls it back to one size, as a limit cycle does and noise does not.`,
        ],
      };
    }
  }
  if (growth.high < 0) {
    const memory = -cycles / growth.value;
    return {
      verdict: 'damped',
      growth,
      reasons: [
        `The rhythm is kept up by noise: it forgets its phase and size within about ${plural(memory, 'cycle')}, and would die away undisturbed.`,
      ],
    };
  }
  return {
    verdict: 'undecided',
    growth,
    reasons: [
      'The rhythm wanders in size and phase; this record fits a damped rhythm kept up by noise as well as a sustained one.',
      `To settle it, record about ${Math.ceil(Math.max(3 * cycles, 20))} cycles, or nudge the system and see whether the rhythm returns to the same size.`,
    ],
  };
}

function decideGrowing(growth: NonNullable<Decision['growth']>, cycles: number): Decision {
  const few = cycles < THRESHOLDS.manyCycles;
  const least = few ? THRESHOLDS.growthInFewCycles : THRESHOLDS.growth;
  if (cycles >= THRESHOLDS.sustainedCycles && growth.low > least) {
    const reason = `The rhythm grows: by a factor of ${factor(growth.value)} over ${figure(cycles)} cycles, more than noise would bring about.`;
    return { verdict: 'sustained', growth, reasons: [reason] };
  }
  return {
    verdict: 'undecided',
    growth,
    reasons: [
      `The rhythm grows by a factor of ${factor(growth.value)} over ${figure(cycles)} cycles; noise can do that for a while.`,
      `To settle it, go on recording until its size stays the same for 8 cycles, about ${Math.ceil(cycles + 10)} in all.`,
    ],
  };
}

function decideDecaying(growth: NonNullable<Decision['growth']>, cycles: number): Decision {
  const life = -cycles / growth.value;
  return {
    verdict: 'damped',
    growth,
    reasons: [
      `The rhythm dies away: it falls to about a third (1/e) within ${plural(life, 'cycle')}; the whole 90 % interval of its growth rate lies below zero.`,
    ],
  };
}

/** Cycles at which √(24/N)·(s/A) would keep the loss within its bound, at least the least number. */
function wantedCycles(r: Rhythm, cycles: number, samplesPerCycle: number): number {
  const ratio = (1.645 * r.noiseRatio) / (0.8 * THRESHOLDS.loss);
  const forNoise = (24 * ratio * ratio) / Math.max(samplesPerCycle, 2);
  return Math.ceil(Math.min(Math.max(forNoise, 1.5 * cycles, 8), 10 * cycles + 20));
}

function percent(growth: number): string {
  return percentOf(1 - Math.exp(Math.min(0, growth)));
}

function percentOf(share: number): string {
  return `${Math.max(1, Math.round(100 * share))} %`;
}

function factor(growth: number): string {
  const value = Math.exp(Math.max(-20, Math.min(20, growth)));
  return value < 0.001 ? 'almost nothing' : figure(value);
}
