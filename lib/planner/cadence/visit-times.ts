/** A moment of a run at which somebody must be there; minutes since the setting. */
export type PlannedVisit = {
  kind: 'set dose' | 'sample' | 'check' | 'collect';
  label: string;
  atMinutes: number;
  minutes: number;
  /** May begin this much before or after `atMinutes`. */
  earlyMinutes: number;
  lateMinutes: number;
};

export type VisitInput = {
  settleMinutes: number;
  recordMinutes: number;
  intervalMinutes: number;
  /** Whether the rig takes the readings without anybody. */
  recordsItself: boolean;
};

const DAY = 1440;
const SET_DOSE = 15;
const SAMPLE = 10;
const CHECK = 10;
const COLLECT = 15;
/** From this interval on, people come and go between samples. */
const SEPARATE_FROM = 120;
/** A recording attended without a break is at most this long; longer ones are visited or shared. */
const LONGEST_STAY = 600;
const SHORTEST_RETURN = 15;
const SHIFT = 240;
/** Samples at least this far apart could fall on the same hour day after day. */
const DAILY_RISK = 720;
const GOLDEN = (Math.sqrt(5) - 1) / 2;

const visit = (
  kind: PlannedVisit['kind'],
  label: string,
  atMinutes: number,
  minutes: number,
  [earlyMinutes, lateMinutes]: [number, number] = [0, 0],
): PlannedVisit => ({ kind, label, atMinutes, minutes, earlyMinutes, lateMinutes });

/** Daily looks strictly between two times, none within a quarter of a day of the later one. */
function dailyChecks(from: number, until: number): PlannedVisit[] {
  const checks: PlannedVisit[] = [];
  for (let day = 1; from + day * DAY < until - DAY / 4; day += 1) {
    checks.push(visit('check', `Day ${day}: check`, from + day * DAY, CHECK, [120, 120]));
  }
  return checks;
}

/**
 * Sampling points from the start of the record to its end, uneven by the golden sequence and kept
 * with their latitude within ± 25 % of the interval. Where the interval is half a day or more most
 * of that goes into unevenness, so that no hour of the day repeats; otherwise into latitude.
 */
function samplingPoints(input: VisitInput): PlannedVisit[] {
  const { settleMinutes: first, intervalMinutes: step } = input;
  const count = Math.max(1, Math.round(input.recordMinutes / step) + 1);
  const spread = step >= DAILY_RISK ? 0.2 : 0.1;
  const latitude = Math.floor((0.25 - spread) * step);
  return Array.from({ length: count }, (_, i) => {
    const shift = spread * (2 * ((i * GOLDEN) % 1) - 1);
    const even = i * step;
    const end = input.recordMinutes;
    const at = first + Math.min(end, Math.max(0, even + (i === 0 ? 0 : shift * step)));
    const early = Math.min(latitude, Math.max(0, at - first));
    const label = `Sample ${i + 1} of ${count}`;
    return visit('sample', label, at, Math.min(SAMPLE, step / 4), [early, latitude]);
  });
}

/** One stay over the whole record, shared out in shifts where it is too long for one person. */
function continuous(input: VisitInput): PlannedVisit[] {
  const { settleMinutes: settle, recordMinutes: record } = input;
  const readings = Math.round(record / input.intervalMinutes) + 1;
  if (settle <= SEPARATE_FROM && settle + record <= LONGEST_STAY) {
    const label = `Set the dose, settle, take ${readings} readings`;
    return [visit('set dose', label, 0, Math.max(settle + record, SET_DOSE))];
  }
  const set = visit('set dose', 'Set the dose', 0, Math.min(SET_DOSE, settle || SET_DOSE));
  const shifts = record > LONGEST_STAY ? Math.ceil(record / SHIFT) : 1;
  const stays = Array.from({ length: shifts }, (_, i) => {
    const what = shifts > 1 ? `readings, shift ${i + 1} of ${shifts}` : `${readings} readings`;
    return visit('sample', `Take ${what}`, settle + (i * record) / shifts, record / shifts);
  });
  return [set, ...dailyChecks(0, settle), ...stays];
}

/**
 * The visits of one run, in order. A rig that records by itself: set the dose, a check a day, collect
 * and upload at the end. By hand: one visit a sampling point from two hours apart, otherwise one
 * stay; a stay over ten hours becomes visits again (from a quarter of an hour apart) or shifts.
 */
export function visitTimes(input: VisitInput): PlannedVisit[] {
  const total = input.settleMinutes + input.recordMinutes;
  if (input.recordsItself) {
    const late = Math.min(240, total);
    return [
      visit('set dose', 'Set the dose, start recording', 0, Math.min(SET_DOSE, total)),
      ...dailyChecks(0, total),
      visit('collect', 'Collect and upload', total, COLLECT, [0, late]),
    ];
  }
  const separate =
    input.intervalMinutes >= SEPARATE_FROM ||
    (input.intervalMinutes >= SHORTEST_RETURN && input.recordMinutes > LONGEST_STAY);
  if (!separate) return continuous(input);
  const points = samplingPoints(input);
  // Hardly anything to settle: the first sample is drawn in the visit that sets the dose.
  const first = input.settleMinutes < SET_DOSE ? points.shift() : undefined;
  const label = first ? `Set the dose. ${first.label}` : 'Set the dose';
  const set = visit('set dose', label, 0, SET_DOSE);
  return [set, ...dailyChecks(0, input.settleMinutes), ...points];
}
