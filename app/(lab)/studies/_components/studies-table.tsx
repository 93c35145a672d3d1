import Link from 'next/link';
import { OnsetRibbon } from '@/components/ribbon';
import { type Column, DataTable } from '@/components/ui';
import type { StudyListRow } from './row-of';

function Title({ row }: { row: StudyListRow }) {
  return (
    <span className="block min-w-40 py-1.5 desk:min-w-44 leading-5">
      <Link href={`/studies/${row.id}`} className="underline-offset-4 hover:underline">
        {row.title}
      </Link>
      <span className="block text-caption font-normal text-ink2">
        <span className="whitespace-nowrap">
          {row.perturbs}
          {row.simulated ? ';' : null}
        </span>
        {row.simulated ? ' ' : null}
        {row.simulated ? <span className="whitespace-nowrap">simulated readings</span> : null}
      </span>
    </span>
  );
}

function Lines({ lines, none }: { lines: string[]; none: string }) {
  if (lines.length === 0) return <span className="text-ink2">{none}</span>;
  return (
    <span className="block whitespace-nowrap">
      {lines.map((line) => (
        <span key={line} className="block">
          {line}
        </span>
      ))}
    </span>
  );
}

/** Predicted above observed, where there is no room for a column each. */
function Both({ row }: { row: StudyListRow }) {
  return (
    <span className="block py-1.5 leading-5">
      <Lines lines={row.predicted} none={row.ribbon ? 'none in the range' : '–'} />
      {row.observed.length > 0 ? (
        <span className="mt-1 block font-semibold">
          <span className="block text-caption font-normal text-ink2">observed</span>
          <Lines lines={row.observed} none="" />
        </span>
      ) : null}
    </span>
  );
}

function Reached({ row }: { row: StudyListRow }) {
  return (
    <span className="block min-w-28 leading-5">
      {row.reached.name}, {row.reached.fact}
      {row.missing ? (
        <span className="block text-caption text-ink2">waits for {row.missing}</span>
      ) : null}
    </span>
  );
}

const columns: Column<StudyListRow>[] = [
  {
    key: 'title',
    head: 'Study, and what it perturbs',
    strong: true,
    cell: (row) => <Title row={row} />,
  },
  {
    key: 'ribbon',
    head: 'Control range',
    cell: (row) =>
      row.ribbon ? (
        <span className="block w-40">
          <OnsetRibbon size="list" {...row.ribbon} />
        </span>
      ) : (
        <span className="text-ink2">no prediction yet</span>
      ),
  },
  {
    key: 'predicted',
    only: 'wide',
    head: 'Predicted onset',
    cell: (row) => <Lines lines={row.predicted} none={row.ribbon ? 'none in the range' : '–'} />,
  },
  {
    key: 'observed',
    only: 'wide',
    head: 'Observed onset',
    cell: (row) => <Lines lines={row.observed} none="–" />,
  },
  {
    key: 'both',
    only: 'narrow',
    head: 'Onset, predicted and observed',
    cell: (row) => <Both row={row} />,
  },
  { key: 'reached', head: 'How far', cell: (row) => <Reached row={row} /> },
];

/** The lab's studies, each with its ribbon. */
export function StudiesTable({ rows }: { rows: StudyListRow[] }) {
  return (
    <DataTable caption="Studies of the lab" columns={columns} rows={rows} rowKey={(r) => r.id} />
  );
}
