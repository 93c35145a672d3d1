import { describe, expect, it } from 'vitest';
import { importReadings } from '@/lib/evidence/import/import-readings';
import type { ImportMapping } from '@/lib/evidence/import/mapping';
import { previewTable } from '@/lib/evidence/import/preview';

const plain: ImportMapping = {
  delimiter: ',',
  decimalMark: '.',
  timeColumn: 'time',
  timeKind: 'elapsed',
  timeUnit: 'h',
  valueColumns: [{ column: 'od', readout: 'density', unit: '1' }],
};

describe('import of readings', () => {
  it('reads a byte order mark, CRLF and quoted cells, and turns elapsed times into minutes', () => {
    const text = '\uFEFFtime,"od",note\r\n0,0.5,"a, b"\r\n1.5,0.75,\r\n';
    const { rows, problems, counts, columns } = importReadings(text, plain);
    expect(problems).toEqual([]);
    expect(columns).toEqual(['time', 'od', 'note']);
    expect(rows).toEqual([
      { row: 2, time: 0, readout: 'density', unit: '1', value: 0.5, state: 'value' },
      { row: 3, time: 90, readout: 'density', unit: '1', value: 0.75, state: 'value' },
    ]);
    expect(counts).toMatchObject({ dataRows: 2, readings: 2, values: 2, problems: 0 });
  });

  it('reads decimal commas in a semicolon table, with a factor', () => {
    const mapping: ImportMapping = {
      ...plain,
      delimiter: ';',
      decimalMark: ',',
      valueColumns: [{ column: 'od', readout: 'density', factor: 1000 }],
    };
    const { rows } = importReadings('time;od\n0,5;0,25\n', mapping);
    expect(rows[0]).toMatchObject({ time: 30, value: 250 });
  });

  it.each([
    ['1,234.56', '.'],
    ['1.234,56', ','],
    ['1.234,56', '.'],
    ['1 234', '.'],
    ["1'234", '.'],
    ['0,5', '.'],
    ['0.5', ','],
    ['12-Mar', '.'],
    ['3/4', '.'],
    ['NaN', '.'],
    ['Infinity', '.'],
    ['0x10', '.'],
    ['1e999', '.'],
    ['#DIV/0!', '.'],
  ] as const)('never guesses what %s with decimal mark "%s" means', (cell, mark) => {
    const mapping: ImportMapping = { ...plain, delimiter: '\t', decimalMark: mark };
    const { rows, problems } = importReadings(`time\tod\n1\t${cell}\n2\t7\n`, mapping);
    expect(rows.map((r) => r.value)).toEqual([7]);
    expect(problems).toHaveLength(1);
    expect(problems[0]).toMatchObject({ row: 2, column: 'od', text: cell });
    expect(problems[0]!.mend.length).toBeGreaterThan(10);
  });

  it('tells missing from below the limit of detection', () => {
    const mapping = { ...plain, missingMarks: ['n/a'], belowLimitMark: '<' };
    const { rows, counts } = importReadings('time,od\n0,N/A\n1,\n2,<0.05\n3,0.4\n', mapping);
    expect(rows.map((r) => [r.state, r.value, r.limit])).toEqual([
      ['missing', null, undefined],
      ['missing', null, undefined],
      ['below limit', null, 0.05],
      ['value', 0.4, undefined],
    ]);
    expect(counts).toMatchObject({ values: 1, missing: 2, belowLimit: 1 });
  });

  it('keeps the good rows of a ragged table and lists the others', () => {
    const { rows, problems } = importReadings('time,od\n0,1\n1\n2,3,4\n,5\n3,6\n', plain);
    expect(rows.map((r) => r.value)).toEqual([1, 6]);
    expect(problems.map((p) => p.row)).toEqual([3, 4, 5]);
  });

  it('flags a second reading of one readout at one time', () => {
    const { rows, problems, counts } = importReadings('time,od\n1,2\n1.0,3\n', plain);
    expect(rows).toHaveLength(1);
    expect(counts.duplicates).toBe(1);
    expect(problems[0]!.reason).toContain('Row 2');
  });

  it('turns dates and clock times of the declared zone into instants, over a change of clocks', () => {
    const mapping: ImportMapping = {
      ...plain,
      timeKind: 'date and clock',
      timeZone: 'Europe/Berlin',
      dateFormat: 'dd.MM.yyyy HH:mm',
    };
    const text =
      'time,od\n28.03.2026 22:00,1\n29.03.2026 05:00,2\n29.03.2026 02:30,3\n25.10.2026 02:30,4\n03/29/2026 06:00,5\n';
    const { rows, problems } = importReadings(text, mapping);
    expect(rows.map((r) => r.time)).toEqual([
      '2026-03-28T21:00:00.000Z',
      '2026-03-29T03:00:00.000Z',
    ]);
    expect(problems.map((p) => p.row)).toEqual([4, 5, 6]);
    expect(problems[0]!.reason).toContain('does not exist');
    expect(problems[1]!.reason).toContain('twice');
  });

  it('reads ISO times with an offset, and refuses a clock time without a date', () => {
    const mapping: ImportMapping = { ...plain, timeKind: 'date and clock', timeZone: 'UTC' };
    const { rows, problems } = importReadings(
      'time,od\n2026-10-25T02:30+02:00,1\n14:30,2\n',
      mapping,
    );
    expect(rows[0]!.time).toBe('2026-10-25T00:30:00.000Z');
    expect(problems).toHaveLength(1);
    const noDate = importReadings('time,od\n14:30,2\n', { ...mapping, dateFormat: 'HH:mm' });
    expect(noDate.rows).toEqual([]);
    expect(noDate.problems[0]!.reason).toContain('year, month and day');
  });

  it.each([
    ['', 'empty'],
    ['time,od\n', 'no rows'],
    ['PK\u0003\u0004\u0000\u0000\ufffd\ufffd\u0001'.repeat(50), 'no text table'],
    ['zeit;od\n1;2\n', 'no column "time"'],
    ['time,od,od\n1,2,3\n', '2 columns "od"'],
  ])('says what is wrong with an unreadable table (%#)', (text, reason) => {
    const { rows, problems } = importReadings(text, plain);
    expect(rows).toEqual([]);
    expect(problems.map((p) => p.reason).join(' ')).toContain(reason);
  });

  it('asks for what is not declared', () => {
    const { problems } = importReadings('time,od\n1,2\n', { ...plain, timeUnit: undefined });
    expect(problems[0]!.reason).toContain('not declared');
    const zone: ImportMapping = { ...plain, timeKind: 'date and clock', timeZone: 'Mars/Base' };
    expect(importReadings('time,od\n1,2\n', zone).problems[0]!.reason).toContain('no time zone');
  });

  it('reads what it may of a very long table and says that the rest was left', () => {
    const text = `time,od\n${Array.from({ length: 500_010 }, (_, i) => `${i},1`).join('\n')}`;
    const { rows, problems } = importReadings(text, plain);
    expect(rows).toHaveLength(500_000);
    expect(problems[0]!.reason).toContain('500,000 rows');
  });
});

describe('preview of a table', () => {
  it('proposes the delimiter and shows the first 20 rows as they stand', () => {
    const text = `t;x\n${Array.from({ length: 30 }, (_, i) => `${i};0,${i}`).join('\n')}`;
    const preview = previewTable(text);
    expect(preview).toMatchObject({ delimiter: ';', columns: ['t', 'x'], problem: null });
    expect(preview.rows).toHaveLength(20);
    expect(preview.rows[3]).toEqual(['3', '0,3']);
  });

  it('says why there is nothing to show', () => {
    expect(previewTable('  \n ').problem).toContain('empty');
  });
});
