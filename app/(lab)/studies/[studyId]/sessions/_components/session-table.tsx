import Link from 'next/link';
import { VerdictMark } from '@/components/marks';
import { type Column, DataTable } from '@/components/ui';
import { dayText, spanText } from '@/lib/format';

export type SessionRow = {
  id: string;
  from: string;
  to: string;
  run: number;
  dose: string;
  what: string;
  rig: string;
  person: string;
  state: string;
  place: 'steady' | 'undecided' | 'sustained';
};

/** The study's sessions in order of time. */
export function SessionTable({ rows, zone }: { rows: SessionRow[]; zone: string }) {
  const columns: Column<SessionRow>[] = [
    {
      key: 'when',
      head: 'When',
      unit: zone,
      strong: true,
      cell: (r) => (
        <Link href={`/sessions/${r.id}`} className="underline underline-offset-4">
          {dayText(r.from, zone)}, {spanText(r.from, r.to, zone)}
        </Link>
      ),
    },
    { key: 'run', head: 'Run', kind: 'figure', cell: (r) => r.run },
    {
      key: 'dose',
      head: 'Dose',
      cell: (r) => (
        <span className="inline-flex items-center gap-2 font-mono">
          <VerdictMark state={r.state === 'suspended' ? 'stopped' : r.place} />
          {r.dose}
        </span>
      ),
    },
    { key: 'what', head: 'What', cell: (r) => r.what },
    { key: 'rig', head: 'Rig', cell: (r) => r.rig },
    { key: 'person', head: 'Person', cell: (r) => r.person },
    {
      key: 'state',
      head: 'State',
      cell: (r) => (r.state === 'suspended' ? 'held by a stop' : r.state),
    },
  ];
  return (
    <DataTable
      caption="Sessions of this study in order of time"
      columns={columns}
      rows={rows}
      rowKey={(r) => r.id}
    />
  );
}
