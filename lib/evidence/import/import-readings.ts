import { IANAZone } from 'luxon';
import { readNumber, readTime } from './cells';
import {
  type ImportedReading,
  type ImportMapping,
  type ImportProblem,
  type ImportResult,
  TIME_UNITS,
  type ValueColumn,
} from './mapping';
import { fileProblem, readTable } from './read-table';

/** Problems listed one by one; further ones are counted. */
const MAX_LISTED = 1000;

/**
 * Reads a table by its declared mapping. Good rows are kept, bad ones listed with row, column, text,
 * reason and how to mend them. Of two readings of one readout at one time the first is kept and the
 * second listed.
 */
export function importReadings(text: string, mapping: ImportMapping): ImportResult {
  const table = readTable(text, mapping.delimiter);
  const collector = new Collector(table.problems);
  const wrong = table.header.length > 0 ? checkMapping(mapping, table.header) : [];
  wrong.forEach((p) => {
    collector.report(p);
  });
  if (table.header.length === 0 || wrong.length > 0) {
    return collector.result(table.header, table.body.length);
  }
  if (table.body.length === 0) {
    collector.report(
      fileProblem('The table has a header and no rows.', 'Export the readings too.'),
    );
  }
  const timeAt = table.header.indexOf(mapping.timeColumn);
  const valueAt = mapping.valueColumns.map((c) => table.header.indexOf(c.column));
  const missing = new Set((mapping.missingMarks ?? []).map((m) => m.trim().toLowerCase()));
  table.body.forEach((cells, i) => {
    const row = i + 2;
    if (cells.length > table.header.length) {
      collector.report({
        row,
        column: '',
        text: cells.slice(table.header.length).join(mapping.delimiter),
        reason: `The row has ${cells.length} cells and the header ${table.header.length}.`,
        mend: 'Remove the extra cells, or put quotation marks around text that holds the delimiter.',
      });
      return;
    }
    const cell = cells[timeAt] ?? '';
    const time = readTime(cell, mapping);
    if (!time.ok) {
      collector.report({ row, column: mapping.timeColumn, text: cell, ...withoutOk(time) });
      return;
    }
    mapping.valueColumns.forEach((column, k) => {
      const text = cells[valueAt[k]!];
      collector.add(row, time.value, column, text, mapping, missing);
    });
  });
  return collector.result(table.header, table.body.length);
}

class Collector {
  private readonly rows: ImportedReading[] = [];
  private readonly problems: ImportProblem[] = [];
  private readonly seen = new Map<string, number>();
  private problemCount = 0;
  private duplicates = 0;

  constructor(problems: ImportProblem[]) {
    for (const p of problems) this.report(p);
  }

  report(problem: ImportProblem): void {
    this.problemCount++;
    if (this.problems.length < MAX_LISTED) {
      this.problems.push({ ...problem, text: problem.text.slice(0, 200) });
    }
  }

  add(
    row: number,
    time: number | string,
    column: ValueColumn,
    text: string | undefined,
    mapping: ImportMapping,
    missing: Set<string>,
  ): void {
    const where = { row, column: column.column, text: text ?? '' };
    if (text === undefined) {
      this.report({
        ...where,
        reason: 'The row ends before this column.',
        mend: 'Fill in the cell, or leave it empty between delimiters if nothing was measured.',
      });
      return;
    }
    const reading = readValue(text, column, mapping, missing);
    if ('reason' in reading) {
      this.report({ ...where, ...reading });
      return;
    }
    const key = `${column.readout}\u0000${time}`;
    const first = this.seen.get(key);
    if (first !== undefined) {
      this.duplicates++;
      this.report({
        ...where,
        reason: `Row ${first} already holds ${column.readout} at this time.`,
        mend: 'Remove one of the two, or correct its time; replicates need readouts of their own.',
      });
      return;
    }
    this.seen.set(key, row);
    const unit = column.unit === undefined ? {} : { unit: column.unit };
    this.rows.push({ row, time, readout: column.readout, ...unit, ...reading });
  }

  result(columns: string[], dataRows: number): ImportResult {
    const of = (state: ImportedReading['state']) =>
      this.rows.filter((r) => r.state === state).length;
    if (this.problemCount > this.problems.length) {
      const more = this.problemCount - this.problems.length;
      this.problems.push(
        fileProblem(
          `${more.toLocaleString('en')} further problems are not listed.`,
          'Mend the listed ones first; one cause often explains them all.',
        ),
      );
    }
    return {
      rows: this.rows,
      problems: this.problems,
      columns,
      counts: {
        dataRows,
        readings: this.rows.length,
        values: of('value'),
        missing: of('missing'),
        belowLimit: of('below limit'),
        problems: this.problemCount,
        duplicates: this.duplicates,
      },
    };
  }
}

type Value = Pick<ImportedReading, 'value' | 'state' | 'limit'>;

function readValue(
  text: string,
  column: ValueColumn,
  mapping: ImportMapping,
  missing: Set<string>,
): Value | { reason: string; mend: string } {
  const cell = text.trim();
  const factor = column.factor ?? 1;
  if (cell === '' || missing.has(cell.toLowerCase())) return { value: null, state: 'missing' };
  const mark = mapping.belowLimitMark;
  if (mark && cell.startsWith(mark)) {
    const limit = readNumber(cell.slice(mark.length), mapping.decimalMark);
    if (!limit.ok) return withoutOk(limit);
    return { value: null, state: 'below limit', limit: limit.value * factor };
  }
  const number = readNumber(cell, mapping.decimalMark);
  return number.ok ? { value: number.value * factor, state: 'value' } : withoutOk(number);
}

function withoutOk(failed: { reason: string; mend: string }): { reason: string; mend: string } {
  return { reason: failed.reason, mend: failed.mend };
}

/** What in the mapping does not fit the table, or is not declared. */
function checkMapping(mapping: ImportMapping, header: string[]): ImportProblem[] {
  const problems: ImportProblem[] = [];
  const names = header.map((h) => `"${h}"`).join(', ');
  const wanted = [mapping.timeColumn, ...mapping.valueColumns.map((c) => c.column)];
  for (const name of new Set(wanted)) {
    const count = header.filter((h) => h === name).length;
    if (count === 1) continue;
    problems.push({
      ...fileProblem(
        count === 0 ? `There is no column "${name}".` : `There are ${count} columns "${name}".`,
        count === 0
          ? `Choose one of ${names.slice(0, 300)}; if these look run together, choose another delimiter.`
          : 'Rename the columns so that each has a name of its own.',
      ),
      column: name,
    });
  }
  const missing = (what: string) =>
    problems.push(fileProblem(`${what} is not declared.`, `Declare it: it is never guessed.`));
  if (mapping.valueColumns.length === 0) missing('A column with readings');
  if (mapping.timeKind === 'elapsed' && !(mapping.timeUnit && mapping.timeUnit in TIME_UNITS)) {
    missing('The unit of the elapsed times');
  }
  if (mapping.timeKind === 'date and clock') {
    if (!mapping.timeZone) missing('The time zone of dates and clock times');
    else if (!IANAZone.isValidZone(mapping.timeZone)) {
      problems.push(
        fileProblem(
          `"${mapping.timeZone}" is no time zone.`,
          'Use a name such as Europe/Berlin or UTC.',
        ),
      );
    }
  }
  if (mapping.dateFormat && !hasDate(mapping.dateFormat)) {
    problems.push(
      fileProblem(
        `The pattern "${mapping.dateFormat}" does not hold year, month and day.`,
        'Use a pattern such as dd.MM.yyyy HH:mm; clock times without a date cannot be placed.',
      ),
    );
  }
  if (mapping.delimiter === mapping.decimalMark) {
    problems.push(
      fileProblem(
        'Delimiter and decimal mark are the same.',
        'Export with semicolons or tabs between columns, or with decimal points.',
      ),
    );
  }
  for (const c of mapping.valueColumns) {
    if (c.factor === undefined || (Number.isFinite(c.factor) && c.factor !== 0)) continue;
    problems.push(
      fileProblem(
        `The factor of "${c.column}" is no usable number.`,
        'Give a number other than 0.',
      ),
    );
  }
  return problems;
}

function hasDate(pattern: string): boolean {
  const tokens = pattern.replace(/'[^']*'/g, '');
  const short = /[yu]/.test(tokens) && /[ML]/.test(tokens) && /d/.test(tokens);
  return short || /[DFfXx]/.test(tokens) || (/[yu]/.test(tokens) && /o/.test(tokens));
}
