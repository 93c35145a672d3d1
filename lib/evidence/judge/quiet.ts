import type { JudgeRequest, Verdict } from '@/lib/contracts';
import type { Analysis } from './analyse';
import type { Series } from './prepare';
import { figure } from './words';

/** Readings needed before the absence of a rhythm says something. */
const ENOUGH_READINGS = 20;
const ENOUGH_CYCLES = 3;
const LEAST_PER_CYCLE = 3;

/** Verdict on a record in which no rhythm stands out: steady, if one would have been seen. */
export function decideQuiet(
  series: Series,
  a: Analysis,
  expected: JudgeRequest['expectedPeriod'],
): { verdict: Verdict; reasons: string[] } {
  const reasons = [scatterWords(series, a)];
  const lacking = whatLacks(series, expected);
  if (lacking !== null) return { verdict: 'undecided', reasons: [...reasons, ...lacking] };
  if (a.null.kind === 'bend' && !(expected && expected.high <= series.span / ENOUGH_CYCLES)) {
    return {
      verdict: 'undecided',
      reasons: [
        ...reasons,
        'A slow bend runs through the whole record and could be part of a rhythm longer than half of it.',
        'To settle it, record at least three times as long, or state the expected period.',
      ],
    };
  }
  return { verdict: 'steady', reasons };
}

function scatterWords(series: Series, a: Analysis): string {
  const drift = {
    flat: '',
    trend: ' beside a straight drift',
    bend: ' beside a slow bend',
    approach: ' beside a settling approach to its level',
    wandering: ' beside an irregular wandering of the level',
  }[a.null.kind];
  const rss = a.null.residuals.reduce((s, v) => s + v * v, 0);
  if (series.noise !== null) {
    const ratio = Math.sqrt(rss / series.t.length) / series.noise;
    const n = series.t.length;
    if (ratio * ratio <= 1 + 2 * Math.sqrt(2 / n)) {
      return `The scatter is what the measurement error alone would give${drift}; no rhythm stands out.`;
    }
    return `No rhythm stands out${drift}, though the scatter is ${figure(ratio)} times the stated measurement error.`;
  }
  return `No rhythm stands out from the scatter${drift}.`;
}

function whatLacks(series: Series, expected: JudgeRequest['expectedPeriod']): string[] | null {
  const n = series.readings;
  if (expected) {
    const cycles = series.totalSpan / expected.high;
    if (cycles < ENOUGH_CYCLES) {
      return [
        `The record covers only ${figure(cycles)} of the longest expected cycles.`,
        `To settle it, record at least ${ENOUGH_CYCLES} of them, better 8 to 10.`,
      ];
    }
    const perCycle = (n / series.totalSpan) * expected.low;
    if (perCycle < LEAST_PER_CYCLE) {
      return [
        `There are only ${figure(perCycle)} readings in the shortest expected cycle.`,
        'To settle it, take at least 6 readings a cycle, better 12.',
      ];
    }
  }
  const widest = series.t.reduce((w, v, i) => Math.max(w, i > 0 ? v - series.t[i - 1]! : 0), 0);
  if (widest > 0.5) {
    return [
      'More than half of the time recorded is one gap without readings.',
      'To settle it, judge the parts on either side of the gap by themselves, or record without it.',
    ];
  }
  if (n < ENOUGH_READINGS) {
    return [
      `With ${n} readings a rhythm could have gone unseen.`,
      `To settle it, take at least ${ENOUGH_READINGS} readings over 3 cycles or more.`,
    ];
  }
  return null;
}
