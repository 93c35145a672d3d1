import { setImmediate as nextTurn } from 'node:timers/promises';
import type { RowProblem } from '@/db/schema';
import type { UploadMapping } from '@/lib/contracts/forms/readings';
import { decodeText } from '@/lib/evidence/import/decode-text';
import { importReadings } from '@/lib/evidence/import/import-readings';
import type { ImportedReading } from '@/lib/evidence/import/mapping';
import { stampText } from '@/lib/format';
import { AppError } from '../errors';
import { splitRecords } from './split-records';

/** A reading with its time counted from the setting. */
export type TimedReading = {
  row: number;
  readout: string;
  minutes: number;
  value: number | null;
  state: ImportedReading['state'];
};

export type ImportedFile = {
  rows: TimedReading[];
  problems: RowProblem[];
  /** All problems, listed or not. */
  refused: number;
  remarks: string[];
};

/** Nothing of the file could be taken; `problems` says why, row by row. */
export class UploadRefused extends AppError {
  constructor(
    message: string,
    readonly problems: RowProblem[],
    mend?: string,
  ) {
    super('invalid-input', message, { at: 'file', mend });
  }
}

/** Cells read at one go: the server answers others in between, and no part has more problems than are listed. */
const PART_CELLS = 900;
const MOST_RECORDS = 500_000;
const MOST_READINGS = 500_000;
const MOST_LISTED = 500;
const LONGEST_MINUTES = 100 * 365.25 * 1440;

type Setting = { setAt: Date; timeZone: string; now: Date };

const minutesSince = (setAt: Date, time: number | string) =>
  typeof time === 'number' ? time : (Date.parse(time) - setAt.getTime()) / 60_000;

class Collected {
  readonly rows: TimedReading[] = [];
  readonly problems: RowProblem[] = [];
  refused = 0;
  ahead = 0;
  private readonly seen = new Map<string, number>();

  constructor(private readonly setting: Setting) {}

  report(problem: RowProblem): void {
    this.refused += 1;
    if (this.problems.length < MOST_LISTED) this.problems.push(problem);
  }

  add(reading: ImportedReading, row: number): void {
    const { setAt, timeZone, now } = this.setting;
    const minutes = minutesSince(setAt, reading.time);
    const { readout, value, state } = reading;
    const where = { row, column: readout, text: String(reading.time) };
    if (minutes < 0) {
      this.report({
        ...where,
        reason: `This time lies before the dose was set (${stampText(setAt, timeZone)}).`,
        mend: 'Choose the run that was on then, or correct the time column, its unit or its zone.',
      });
      return;
    }
    if (!(minutes <= LONGEST_MINUTES)) {
      this.report({
        ...where,
        reason: 'This time lies more than a hundred years after the setting.',
        mend: 'Correct the cell, or the declared unit of the time column.',
      });
      return;
    }
    const key = `${readout}\u0000${minutes}`;
    const first = this.seen.get(key);
    if (first !== undefined) {
      this.report({
        ...where,
        reason: `Row ${first} already holds ${readout} at this time.`,
        mend: 'Remove one of the two, or correct its time; replicates need readouts of their own.',
      });
      return;
    }
    this.seen.set(key, row);
    if (setAt.getTime() + minutes * 60_000 > now.getTime()) this.ahead += 1;
    this.rows.push({ row, readout, minutes, value, state });
  }
}

function refuseWhole(message: string, problems: RowProblem[], mend?: string): never {
  throw new UploadRefused(message, problems, mend ?? problems[0]?.mend);
}

const tooMany = (what: string) =>
  new AppError('too-large', `The file holds more than ${what}. Nothing was kept.`, {
    at: 'file',
    mend: 'Average readings in succession before the upload, or split the file.',
  });

/** One part under the file's header; a fault of the whole file or its mapping ends everything. */
function readPart(
  found: Collected,
  mapping: UploadMapping,
  part: { header: string; records: string[]; lines: number[] },
): void {
  const result = importReadings([part.header, ...part.records].join('\n'), mapping);
  const lineOf = (row: number) => part.lines[row - 2] ?? row;
  const whole = result.problems.filter((p) => p.row === 0);
  if (whole.length > 0) refuseWhole(whole[0]!.reason, whole);
  for (const p of result.problems) found.report({ ...p, row: lineOf(p.row) });
  for (const r of result.rows) found.add(r, lineOf(r.row));
  if (found.rows.length > MOST_READINGS) {
    throw tooMany(`${MOST_READINGS.toLocaleString('en')} readings`);
  }
}

function remarksOf({ ahead }: Collected): string[] {
  if (ahead === 0) return [];
  const readings = `${ahead} ${ahead === 1 ? 'reading lies' : 'readings lie'}`;
  return [`${readings} in the future: check the time column, its unit and its zone.`];
}

/**
 * Reads a file by its declared mapping, in parts: good rows with minutes since the setting, bad ones
 * with row, column, text, reason and how to mend them. A file of which nothing can be kept is refused.
 */
export async function importFile(
  file: { bytes: Uint8Array; mapping: UploadMapping },
  setting: Setting,
): Promise<ImportedFile> {
  const { mapping } = file;
  const { header, records, lines } = splitRecords(decodeText(file.bytes), mapping.delimiter);
  if (records.length > MOST_RECORDS) throw tooMany(`${MOST_RECORDS.toLocaleString('en')} rows`);
  const found = new Collected(setting);
  const size = Math.ceil(PART_CELLS / mapping.valueColumns.length);
  for (let i = 0; i === 0 || i < records.length; i += size) {
    const part = { header, records: records.slice(i, i + size), lines: lines.slice(i, i + size) };
    readPart(found, mapping, part);
    await nextTurn();
  }
  if (found.rows.length === 0) {
    refuseWhole(
      `None of the ${records.length} rows could be read. Nothing was kept.`,
      found.problems,
      'Look at the rows below: the declared marks, columns and units most often explain all of them.',
    );
  }
  return {
    rows: found.rows,
    problems: found.problems,
    refused: found.refused,
    remarks: remarksOf(found),
  };
}
