import { type Options, RRule, Weekday } from 'rrule';
import type { Hours } from '../../contracts/lay-out';
import { parseRule, untilWall } from './hours';
import { dayWords, parseZone } from './time';

const DAYS = ['Mon', 'Tue', 'Wed', 'Thu', 'Fri', 'Sat', 'Sun'];
const MONTHS = 'Jan Feb Mar Apr May Jun Jul Aug Sep Oct Nov Dec'.split(' ');

function ordinal(n: number): string {
  if (n === -1) return 'last';
  if (n < 0) return `${ordinal(-n)} last`;
  const tens = n % 100;
  const tail = tens > 10 && tens < 14 ? 'th' : (['th', 'st', 'nd', 'rd'][n % 10] ?? 'th');
  return `${n}${tail}`;
}

const asList = <T>(value: T | T[] | null | undefined): T[] =>
  value === null || value === undefined ? [] : Array.isArray(value) ? value : [value];

/** "Mon to Fri", "Mon, Wed and Fri", "1st Tue". */
function weekdayWords(options: Partial<Options>): string {
  const days = asList(options.byweekday).filter((d) => d instanceof Weekday);
  if (days.some((d) => d.n)) {
    return joinWords(days.map((d) => `${d.n ? `${ordinal(d.n)} ` : ''}${DAYS[d.weekday]}`));
  }
  const plain = [...new Set(days.map((d) => d.weekday))].sort((a, b) => a - b);
  if (plain.length === 7) return 'every day';
  const run = plain.every((d, i) => i === 0 || d === plain[i - 1]! + 1);
  if (plain.length > 2 && run) return `${DAYS[plain[0]!]} to ${DAYS[plain[plain.length - 1]!]}`;
  return joinWords(plain.map((d) => DAYS[d]!));
}

function joinWords(items: string[]): string {
  if (items.length <= 1) return items[0] ?? '';
  return `${items.slice(0, -1).join(', ')} and ${items[items.length - 1]}`;
}

function everyWords(options: Partial<Options>): string {
  const interval = options.interval ?? 1;
  const unit = ['year', 'month', 'week', 'day'][options.freq ?? RRule.DAILY] ?? 'day';
  return interval === 1 ? `every ${unit}` : `every ${ordinal(interval)} ${unit}`;
}

function dateWords(options: Partial<Options>): string {
  const days = weekdayWords(options);
  const dates = asList(options.bymonthday).map((d) => `the ${ordinal(d)}${d < 0 ? ' day' : ''}`);
  const every = everyWords(options);
  const interval = options.interval ?? 1;
  const weekly = options.freq === RRule.WEEKLY || options.freq === RRule.DAILY;
  const parts = [days, ...dates].filter(Boolean);
  if (parts.length === 0) return every;
  if (weekly && interval === 1) return parts.join(', ');
  return `${parts.join(', ')}, ${every}`;
}

/** Parts too rare for words of their own are given as the rule has them. */
function restWords(options: Partial<Options>): string[] {
  const months = asList(options.bymonth).map((m) => MONTHS[m - 1] ?? String(m));
  const positions = asList(options.bysetpos).map(ordinal);
  const out: string[] = [];
  if (months.length > 0) out.push(`in ${joinWords(months)}`);
  if (positions.length > 0) out.push(`only the ${joinWords(positions)} of these`);
  const weeks = asList(options.byweekno);
  if (weeks.length > 0) out.push(`in weeks ${joinWords(weeks.map(String))}`);
  const yearDays = asList(options.byyearday);
  if (yearDays.length > 0) out.push(`on days ${joinWords(yearDays.map(String))} of the year`);
  return out;
}

function explainOne(hours: Hours, timeZone: string, at: string): string {
  const zone = parseZone(timeZone);
  const options = parseRule(hours.rrule, at);
  const parts = [dateWords(options), ...restWords(options)];
  if (options.count) parts.push(options.count === 1 ? 'once' : `${options.count} times`);
  const until = untilWall(hours.rrule, options, zone);
  if (until) {
    const utc = parseZone('Etc/UTC');
    parts.push(`until ${dayWords(until.getTime(), utc)} ${until.getUTCFullYear()}`);
  }
  const overnight = hours.to <= hours.from ? ' the next day' : '';
  parts.push(`${hours.from}–${hours.to}${overnight}`);
  return parts.join(', ');
}

/** Working or opening hours in plain words: "Mon to Fri, 08:00–17:00; Sat, 09:00–12:00". */
export function explainHours(hours: Hours | readonly Hours[], timeZone: string): string {
  const list = 'rrule' in hours ? [hours] : hours;
  if (list.length === 0) return 'never';
  return list.map((h, i) => explainOne(h, timeZone, `hours.${i}.rrule`)).join('; ');
}
