'use client';

import { DataTable } from '@/components/ui';
import type { MappingDraft, Preview } from './mapping-draft';

/** What a column is taken for, beneath its name. */
function use(column: string, draft: MappingDraft): string {
  if (column === draft.timeColumn) return 'time';
  return draft.readouts[column] || 'not used';
}

/** The first rows as they stand in the file, with what each column is taken for. */
export function PreviewTable({ preview, draft }: { preview: Preview; draft: MappingDraft }) {
  const { columns, rows, problem } = preview;
  if (problem) return <p className="border-l-[3px] border-ink pl-2 font-semibold">{problem}</p>;
  if (columns.length === 0) return null;
  const numbered = rows.map((cells, i) => ({ cells, row: i + 1 }));
  return (
    <div>
      <p className="mb-2 text-caption text-ink2">
        The first {rows.length} rows as they stand in the file.
      </p>
      <DataTable
        caption="First rows of the file"
        columns={columns.map((column, i) => ({
          key: column,
          head: column || '(no name)',
          unit: use(column, draft),
          cell: (r: (typeof numbered)[number]) => (
            <span className="font-mono whitespace-nowrap">{r.cells[i] ?? ''}</span>
          ),
        }))}
        rows={numbered}
        rowKey={(r) => String(r.row)}
        empty="There are no rows beneath the names of the columns."
      />
    </div>
  );
}
