import type { Note } from '@/lib/contracts';
import { lengthToTell, missedPeak } from './resolution';

export type CadenceInput = {
  /** Growth rate predicted at the level, per minute; null: unknown. */
  growthRate: number | null;
  /** Range of the periods that are expected, minutes; null: no rhythm is predicted. */
  period: { low: number; value: number; high: number } | null;
  /** Noise sd of one reading over the amplitude of the rhythm (or of the nudge); default 0.2. */
  noiseShare?: number;
  /** Shortest and longest interval at which this rig or person can take readings, minutes. */
  shortestInterval?: number;
  longestInterval?: number;
  /** Longest that a level may settle and record, minutes; default 30 and 40 cycles. */
  settleCap?: number;
  recordCap?: number;
  readingsPerCycle?: number;
};

export type LevelCadence = {
  settleMinutes: number;
  recordMinutes: number;
  intervalMinutes: number;
  readings: number;
  /** Cycles of the longest expected period that the record covers. */
  cycles: number;
  notes: Note[];
};

/** Time constants to settle: 95 % and 99 % of the way (e^−3, e^−4.6). */
const SETTLE_LEAST = 3;
const SETTLE_AIM = 4.6;
const LEAST_CYCLES = 6;
const LEAST_READINGS = 6;
const DEFAULT_READINGS = 12;
const DEFAULT_NOISE = 0.2;
const SETTLE_CAP_CYCLES = 30;
/** Common practice where nothing is known of the rate. */
const UNKNOWN_SETTLE_CYCLES = 10;
const RECORD_CAP_CYCLES = 40;

const NICE = [1, 1.2, 1.5, 2, 2.5, 3, 4, 5, 6, 7.5, 8];
const NICE_MINUTES = [10, 12, 15, 20, 25, 30, 40, 45, 60, 90, 120, 150, 180, 240, 300, 360, 480];

/** The largest round interval ≤ x: clock-friendly from ten minutes, else two digits. */
function roundDown(x: number): number {
  const slack = x * (1 + 1e-9);
  if (x >= 1440) return Math.floor(slack / 720) * 720;
  if (x >= 720) return 720;
  if (x >= 10) return NICE_MINUTES.filter((n) => n <= slack).at(-1)!;
  const inSeconds = x < 1 ? 60 : 1;
  const scale = 10 ** Math.floor(Math.log10(x * inSeconds * (1 + 1e-9)));
  return (NICE.filter((n) => n * scale <= slack * inSeconds).at(-1)! * scale) / inSeconds;
}

/** Two digits upwards below ten minutes, whole minutes to two hours, five minutes beyond. */
function roundUp(x: number): number {
  if (x <= 0) return 0;
  const grid = x > 120 ? 5 : x > 10 ? 1 : 10 ** (Math.floor(Math.log10(x)) - 1);
  return Math.ceil((x / grid) * (1 - 1e-9)) * grid;
}

const shown = (minutes: number): string => {
  const [value, unit] =
    minutes >= 2880
      ? [minutes / 1440, 'd']
      : minutes >= 120
        ? [minutes / 60, 'h']
        : minutes >= 2
          ? [minutes, 'min']
          : [minutes * 60, 's'];
  return `${Number(value.toPrecision(3))} ${unit}`;
};

function settling(input: CadenceInput, period: number, notes: Note[]): number {
  const cap = input.settleCap ?? SETTLE_CAP_CYCLES * period;
  if (input.growthRate === null) {
    const usual = Math.min(cap, UNKNOWN_SETTLE_CYCLES * period);
    const text = `The prediction does not reach this level: settling is set to ${shown(usual)}.`;
    notes.push({ code: 'slow-settling', text });
    return usual;
  }
  const rate = Math.abs(input.growthRate);
  const tau = rate > 0 ? 1 / rate : Number.POSITIVE_INFINITY;
  const aim = SETTLE_AIM * tau;
  if (aim <= cap) return aim;
  const least = SETTLE_LEAST * tau;
  const wish = Number.isFinite(least)
    ? `Three time constants are ${shown(least)}`
    : 'So near the onset no settling time is long enough';
  const text =
    least <= cap
      ? `Settling is held to ${shown(cap)}; 99 % would take ${shown(aim)}.`
      : `${wish}; settling is held to ${shown(cap)}, so judge only the late part of the record.`;
  notes.push({ code: 'slow-settling', text });
  return cap;
}

function interval(input: CadenceInput, shortestPeriod: number, notes: Note[]): number {
  const wanted = Math.max(LEAST_READINGS, input.readingsPerCycle ?? DEFAULT_READINGS);
  const ideal = shortestPeriod / wanted;
  const limited = Math.min(
    input.longestInterval ?? Number.POSITIVE_INFINITY,
    Math.max(input.shortestInterval ?? 0, roundDown(ideal)),
  );
  const perCycle = shortestPeriod / limited;
  if (perCycle < LEAST_READINGS * (1 - 1e-9)) {
    const missed =
      perCycle > 2
        ? `up to ${Math.round(100 * missedPeak(perCycle))} % of a peak can be missed`
        : 'its rhythm would appear as a slower one';
    const text = `Only ${Number(perCycle.toPrecision(2))} readings fit into the shortest expected period, ${shown(shortestPeriod)}: ${missed}.`;
    notes.push({ code: 'interval-limited', text });
  }
  return limited;
}

function recording(
  input: CadenceInput,
  longestPeriod: number,
  step: number,
  notes: Note[],
): number {
  const cap = input.recordCap ?? RECORD_CAP_CYCLES * longestPeriod;
  const least = LEAST_CYCLES * longestPeriod;
  const noise = input.noiseShare ?? DEFAULT_NOISE;
  const tell = input.growthRate === null ? 0 : lengthToTell(input.growthRate, noise, step);
  const wanted = Math.max(least, tell);
  if (wanted <= cap) return wanted;
  const need = Number.isFinite(wanted)
    ? `telling damped from sustained takes ${shown(wanted)}`
    : 'no length of record tells damped from sustained at the onset itself';
  const text = `The record is held to ${shown(cap)}; ${need}. The verdict may stay undecided.`;
  notes.push({ code: 'record-capped', text });
  return cap;
}

/**
 * How long to settle, how long to record and how often to read at one level; minutes.
 * Settling: 4.6 time constants 1/|growth rate| (never under 3 unless capped). Interval: 12 readings
 * in the shortest expected period, never under 6 unless the rig cannot. Record: long enough to tell
 * the growth rate from zero at 95 % (see `rateError`), at least 6 of the longest expected periods.
 */
export function planCadence(input: CadenceInput): LevelCadence {
  const notes: Note[] = [];
  const tau = input.growthRate ? 1 / Math.abs(input.growthRate) : 60;
  const period = input.period ?? { low: tau, value: tau, high: tau };
  if (input.period === null) {
    const text = `No rhythm is predicted here: the record is laid out for a period of ${shown(tau)}.`;
    notes.push({ code: 'no-period', text });
  }
  const settle = settling(input, period.value, notes);
  const settleMinutes = Math.min(roundUp(settle), input.settleCap ?? Number.POSITIVE_INFINITY);
  const intervalMinutes = interval(input, period.low, notes);
  const length = recording(input, period.high, intervalMinutes, notes);
  const most = Math.floor(((input.recordCap ?? Infinity) / intervalMinutes) * (1 + 1e-9));
  const steps = Math.max(1, Math.min(most, Math.ceil((length / intervalMinutes) * (1 - 1e-9))));
  const whole = Math.max(input.recordCap ?? Infinity, intervalMinutes);
  const recordMinutes = Math.min(steps * intervalMinutes, whole);
  return {
    settleMinutes,
    recordMinutes,
    intervalMinutes,
    readings: steps + 1,
    cycles: recordMinutes / period.high,
    notes,
  };
}
