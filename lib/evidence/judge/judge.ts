import type { Interval, JudgeAnswer, JudgeRequest } from '@/lib/contracts';
import { type Analysis, analyse, laterPart, type Rhythm } from './analyse';
import { type Decision, decideRhythm, isDriven, THRESHOLDS } from './decide';
import { MIN_READINGS, prepare, type Series } from './prepare';
import { decideQuiet } from './quiet';
import { figure } from './words';

/**
 * What one run's record shows: steady, damped, sustained or undecided. A low false alarm alone
 * never makes a rhythm sustained; the growth rate's 90 % interval decides, under a model in which
 * noise may keep a damped rhythm alive (see state-space.ts). The answer does not depend on the
 * units of time and value.
 */
export function judge(request: JudgeRequest): JudgeAnswer {
  const prepared = prepare(request);
  if (prepared.kind === 'too-few') {
    return empty('undecided', [
      `Only ${prepared.readings} valid reading${prepared.readings === 1 ? '' : 's'}: too few to judge.`,
      `To settle it, take at least ${MIN_READINGS} readings; 12 a cycle over 8 to 10 cycles decide most records.`,
    ]);
  }
  if (prepared.kind === 'constant') {
    return {
      ...empty('steady', ['All readings are equal.']),
      falseAlarm: 1,
      ...coverage(prepared, expectedMiddle(request)),
    };
  }
  const { series, remarks } = prepared;
  const analysis = analyse(series, request.expectedPeriod);
  const slips =
    analysis.outliers > 0
      ? [
          `${analysis.outliers} reading${analysis.outliers === 1 ? '' : 's'} far off the rest had no weight.`,
        ]
      : [];
  const extra = [...slips, ...remarks];
  if (analysis.rhythm && analysis.evidence > THRESHOLDS.evidence) {
    return rhythmic(request, series, analysis, analysis.rhythm, extra);
  }
  const { verdict, reasons } = decideQuiet(series, analysis, request.expectedPeriod);
  return {
    ...empty(verdict, [...reasons, ...extra]),
    falseAlarm: analysis.falseAlarm,
    ...coverage({ readings: series.readings, span: series.totalSpan }, expectedMiddle(request)),
  };
}

function rhythmic(
  request: JudgeRequest,
  series: Series,
  analysis: Analysis,
  rhythm: Rhythm,
  extra: string[],
): JudgeAnswer {
  const driven = isDriven(rhythm);
  const frequency = driven ? rhythm.driven.frequency : rhythm.oscillation.frequency;
  const period = series.span / frequency;
  const covered = coverage({ readings: series.readings, span: series.totalSpan }, period);
  const decision =
    settledLater(request, series, rhythm) ?? decideRhythm(rhythm, covered.samplesPerCycle);
  const half = 1.645 * rhythm.driven.frequencySd;
  const amplitude = rhythm.amplitude;
  return {
    verdict: decision.verdict,
    period: {
      value: period,
      low: series.span / (frequency + half),
      high: series.span / Math.max(frequency - half, 0.25 * frequency),
    },
    amplitude: {
      value: amplitude.value * series.scale,
      low: Math.max(0, amplitude.value - amplitude.halfWidth) * series.scale,
      high: (amplitude.value + amplitude.halfWidth) * series.scale,
    },
    growthRate: perTime(decision.growth, series.span),
    falseAlarm: analysis.falseAlarm,
    ...covered,
    reasons: [...decision.reasons, ...cautions(request, period, covered.samplesPerCycle), ...extra],
  };
}

/** Where the later part of a record may begin when its first part looks like a transient. */
const LATER = [0.4, 0.6];

/**
 * A rhythm that first grew or shrank and then keeps its size is sustained: the later part of such a
 * record is judged alone. Null where the record shows no such beginning or the later part does not decide.
 */
function settledLater(request: JudgeRequest, series: Series, rhythm: Rhythm): Decision | null {
  const { early, amplitude, oscillation } = rhythm;
  const grew = early < 0.6 * amplitude.value;
  const shrank = early > 1.15 * amplitude.value && amplitude.value > 0.3 * early;
  if (!(grew || shrank)) return null;
  for (const share of LATER) {
    if ((1 - share) * oscillation.frequency < THRESHOLDS.sustainedCycles) continue;
    const decision = sustainedFrom(request, series, share);
    const beginning = `The rhythm ${grew ? 'grew' : 'shrank'} at first; the later ${Math.round(100 * (1 - share))} % of the record was judged alone.`;
    if (decision) return { ...decision, reasons: [beginning, ...decision.reasons] };
  }
  return null;
}

function sustainedFrom(request: JudgeRequest, series: Series, share: number): Decision | null {
  const part = laterPart(series, share);
  const again = analyse(part, request.expectedPeriod);
  if (again.rhythm === null || again.evidence < THRESHOLDS.evidence) return null;
  const decision = decideRhythm(again.rhythm, part.readings / again.rhythm.oscillation.frequency);
  if (decision.verdict !== 'sustained' || decision.growth === null) return null;
  const { value, low, high } = decision.growth;
  if (low > 0 && value > THRESHOLDS.slightGrowth) return null;
  const stretch = series.span / part.span;
  return {
    verdict: 'sustained',
    growth: { value: value * stretch, low: low * stretch, high: high * stretch },
    reasons: decision.reasons,
  };
}

function cautions(request: JudgeRequest, period: number, samplesPerCycle: number): string[] {
  const reasons: string[] = [];
  const expected = request.expectedPeriod;
  if (expected && (period < expected.low || period > expected.high)) {
    reasons.push(
      `The period ${figure(period)} lies outside the expected ${figure(expected.low)} to ${figure(expected.high)}.`,
    );
  }
  if (samplesPerCycle < 6) {
    reasons.push(
      `There are only ${figure(samplesPerCycle)} readings a cycle: peaks are missed, and the true period may be a shorter one.`,
    );
  }
  return reasons;
}

function perTime(growth: Decision['growth'], span: number): Interval | null {
  if (growth === null) return null;
  return { value: growth.value / span, low: growth.low / span, high: growth.high / span };
}

function expectedMiddle(request: JudgeRequest): number | null {
  const e = request.expectedPeriod;
  return e ? Math.sqrt(e.low * e.high) : null;
}

function coverage(record: { readings: number; span: number }, period: number | null) {
  if (period === null || !(record.span > 0)) return { cyclesCovered: 0, samplesPerCycle: 0 };
  const cyclesCovered = record.span / period;
  return { cyclesCovered, samplesPerCycle: record.readings / cyclesCovered };
}

function empty(verdict: JudgeAnswer['verdict'], reasons: string[]): JudgeAnswer {
  return {
    verdict,
    period: null,
    amplitude: null,
    growthRate: null,
    falseAlarm: null,
    cyclesCovered: 0,
    samplesPerCycle: 0,
    reasons,
  };
}
