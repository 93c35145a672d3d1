import clsx from 'clsx';
import type { ReactNode } from 'react';
import { type IntervalLike, type IntervalStyle, intervalParts } from '@/lib/format';
import { ScrollRegion } from './scroll-region';

export type Column<Row> = {
  key: string;
  head: ReactNode;
  /** in print, on the second line of the head */
  unit?: string;
  /** figures stand right, in the monospaced face */
  kind?: 'text' | 'figure';
  /** the column that names the row */
  strong?: boolean;
  /** shown at a desk's width alone, or below it alone */
  only?: 'wide' | 'narrow';
  cell: (row: Row) => ReactNode;
};

type TableProps<Row> = {
  /** what the table shows, read out before it */
  caption: string;
  columns: Column<Row>[];
  rows: Row[];
  rowKey: (row: Row) => string;
  selectedKey?: string;
  /** shown in place of rows when there are none */
  empty?: ReactNode;
};

/** Heads 13 in the second ink with the unit beneath, an ink rule, rows of 38 px, no stripes. */
export function DataTable<Row>(props: TableProps<Row>) {
  const { caption, columns, rows, rowKey, selectedKey, empty } = props;
  return (
    <ScrollRegion label={caption} className="rounded-key border border-rule bg-plate">
      <table className="w-full border-collapse text-body">
        <caption className="sr-only">{caption}</caption>
        <thead>
          <tr className="border-b border-ink">
            {columns.map((column) => (
              <Head key={column.key} column={column} />
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => {
            const key = rowKey(row);
            const selected = key === selectedKey;
            return (
              <tr
                key={key}
                aria-current={selected || undefined}
                className={clsx('border-b border-rule last:border-b-0', selected && 'bg-selected')}
              >
                {columns.map((column) => (
                  <Cell key={column.key} column={column} row={row} />
                ))}
              </tr>
            );
          })}
          {rows.length === 0 && empty ? (
            <tr>
              <td colSpan={columns.length} className="px-4 py-2 text-ink2">
                {empty}
              </td>
            </tr>
          ) : null}
        </tbody>
      </table>
    </ScrollRegion>
  );
}

const EDGE = 'px-2.5 first:pl-4 last:pr-[11px]';

const onlyClass = ({ only }: { only?: 'wide' | 'narrow' }) =>
  only && (only === 'wide' ? 'hidden desk:table-cell' : 'desk:hidden');

function Head<Row>({ column }: { column: Column<Row> }) {
  return (
    <th
      scope="col"
      className={clsx(
        EDGE,
        onlyClass(column),
        'pt-2 pb-2 align-bottom text-caption font-medium text-ink2',
        column.kind === 'figure' && !column.strong ? 'text-right' : 'text-left',
      )}
    >
      {column.head}
      {column.unit ? <span className="block">{column.unit}</span> : null}
    </th>
  );
}

function Cell<Row>({ column, row }: { column: Column<Row>; row: Row }) {
  const className = clsx(
    EDGE,
    onlyClass(column),
    'h-[38px] py-1.5 text-left font-normal',
    column.kind === 'figure' && 'whitespace-nowrap font-mono',
    column.kind === 'figure' && !column.strong && 'text-right',
    column.strong && 'font-semibold',
  );
  return column.strong ? (
    <th scope="row" className={className}>
      {column.cell(row)}
    </th>
  ) : (
    <td className={className}>{column.cell(row)}</td>
  );
}

/** A figure of 15 with its 90 % interval in 13, second ink. */
export function IntervalFigure({
  interval,
  style,
}: {
  interval: IntervalLike | null;
  style?: IntervalStyle;
}) {
  if (!interval) return <span className="text-ink2">{'\u2013'}</span>;
  const { value, range } = intervalParts(interval, style);
  return (
    <>
      {value}
      <span className="font-sans"> </span>
      <span className="ml-0.5 text-caption text-ink2">{range}</span>
    </>
  );
}
