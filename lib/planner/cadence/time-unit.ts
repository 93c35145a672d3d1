import { EngineError } from '@/lib/contracts';

/** Minutes in one of each UCUM time unit (ucum.org); a month and a year are UCUM's mean Julian. */
const MINUTES: Readonly<Record<string, number>> = {
  us: 1 / 60_000_000,
  ms: 1 / 60_000,
  s: 1 / 60,
  min: 1,
  h: 60,
  d: 1440,
  wk: 10_080,
  mo: 30.4375 * 1440,
  a: 365.25 * 1440,
};

/** Minutes in one `code`, a UCUM unit of time; an unknown code is an `invalid-request`. */
export function minutesPerUnit(code: string): number {
  const minutes = Object.hasOwn(MINUTES, code) ? MINUTES[code] : undefined;
  if (minutes === undefined) {
    throw new EngineError(
      'invalid-request',
      `“${code}” is not a unit of time known here: write one of ${Object.keys(MINUTES).join(', ')}`,
      'timeUnit',
    );
  }
  return minutes;
}
