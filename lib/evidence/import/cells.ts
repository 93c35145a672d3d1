import { DateTime } from 'luxon';
import { type ImportMapping, TIME_UNITS } from './mapping';

export type Cell<T> = { ok: true; value: T } | { ok: false; reason: string; mend: string };

const POINT = /^[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d{1,3})?$/;
const COMMA = /^[+-]?(\d+,?\d*|,\d+)([eE][+-]?\d{1,3})?$/;

/** A number with the declared decimal mark. Marks between thousands are refused, never dropped. */
export function readNumber(text: string, mark: '.' | ','): Cell<number> {
  const cell = text.trim().replace('\u2212', '-');
  if ((mark === '.' ? POINT : COMMA).test(cell)) {
    const value = Number(cell.replace(',', '.'));
    if (Number.isFinite(value)) return { ok: true, value };
    return { ok: false, reason: 'The number is too large.', mend: 'Give it in a larger unit.' };
  }
  return { ok: false, ...whyNoNumber(cell, mark) };
}

function whyNoNumber(cell: string, mark: '.' | ','): { reason: string; mend: string } {
  const other = mark === '.' ? ',' : '.';
  if (/^[+-]?\d{1,3}([.,' \u00a0\u202f]\d{3})+([.,]\d+)?$/.test(cell)) {
    return {
      reason: `A mark between thousands, or a decimal mark other than "${mark}".`,
      mend: 'Write the number without marks between thousands, or change the declared decimal mark.',
    };
  }
  if (new RegExp(`^[+-]?\\d*\\${other}\\d+`).test(cell)) {
    return {
      reason: `The decimal mark is "${other}", but "${mark}" was declared.`,
      mend: 'Change the declared decimal mark, or the cell.',
    };
  }
  if (/^\d+:\d{2}(:\d{2})?([.,]\d+)?$/.test(cell)) {
    return {
      reason: 'This is clock notation, not a number.',
      mend: 'Write elapsed time as a number of its unit (90 min, 1.5 h), or declare dates and clock times.',
    };
  }
  if (/^[<>≤≥]/.test(cell)) {
    return {
      reason: 'A comparison sign that was not declared.',
      mend: 'Declare the mark of values below the limit of detection, or change the cell.',
    };
  }
  if (/^\d{1,2}[-./ ]?[A-Za-z]{3}/.test(cell) || /^\d{1,4}[-/]\d{1,2}([-/]\d{1,4})?$/.test(cell)) {
    return {
      reason: 'This looks like a date; spreadsheets turn some values into dates by themselves.',
      mend: 'Format the column as text or number in the spreadsheet and export it again.',
    };
  }
  return {
    reason: 'This is no number.',
    mend: 'Write a plain number, leave the cell empty, or declare this text as a mark of missing values.',
  };
}

/** Minutes since the setting, or an ISO instant in UTC. */
export function readTime(text: string, mapping: ImportMapping): Cell<number | string> {
  const cell = text.trim();
  if (cell === '') {
    return { ok: false, reason: 'The time is missing.', mend: 'Fill in the time of this reading.' };
  }
  if (mapping.timeKind === 'elapsed') {
    const number = readNumber(cell, mapping.decimalMark);
    if (!number.ok) return number;
    return { ok: true, value: number.value * TIME_UNITS[mapping.timeUnit ?? 'min'] };
  }
  const zone = mapping.timeZone ?? 'UTC';
  // Without a date luxon would fill in today's: no reading time may depend on the clock.
  if (!mapping.dateFormat && !/^\d{4}-?\d{2}-?\d{2}/.test(cell)) return notAsDeclared(mapping);
  const instant = mapping.dateFormat
    ? DateTime.fromFormat(cell, mapping.dateFormat, { zone, locale: 'en' })
    : DateTime.fromISO(cell, { zone });
  if (!instant.isValid) return notAsDeclared(mapping);
  if (hasOwnOffset(cell, mapping.dateFormat)) return { ok: true, value: instant.toUTC().toISO()! };
  if (skipped(instant, cell, mapping)) {
    return {
      ok: false,
      reason: `This clock time does not exist in ${zone}: the clocks were put forward over it.`,
      mend: 'Correct the time, or declare the zone in which the instrument keeps time.',
    };
  }
  if (instant.getPossibleOffsets().length > 1) {
    return {
      ok: false,
      reason: `This clock time came twice in ${zone}: the clocks were put back over it.`,
      mend: 'Write it with its offset (2026-10-25T02:30+02:00), or in UTC.',
    };
  }
  return { ok: true, value: instant.toUTC().toISO()! };
}

function notAsDeclared(mapping: ImportMapping): { ok: false; reason: string; mend: string } {
  return {
    ok: false,
    reason: mapping.dateFormat
      ? `The time is not written as ${mapping.dateFormat}.`
      : 'The time is not written as ISO 8601 (2026-03-28T22:00).',
    mend: 'Declare the pattern that the file uses, or correct the cell.',
  };
}

function hasOwnOffset(cell: string, format: string | undefined): boolean {
  return format ? /[Zz]/.test(format.replace(/'[^']*'/g, '')) : /(Z|[+-]\d\d:?\d\d)$/.test(cell);
}

/** A local time inside a gap reads back as another clock time. */
function skipped(instant: DateTime, cell: string, mapping: ImportMapping): boolean {
  const naive = mapping.dateFormat
    ? DateTime.fromFormat(cell, mapping.dateFormat, { zone: 'UTC', locale: 'en' })
    : DateTime.fromISO(cell, { zone: 'UTC' });
  return naive.isValid && (naive.hour !== instant.hour || naive.minute !== instant.minute);
}
