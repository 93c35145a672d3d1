import { type Column, DataTable } from '@/components/ui';
import type { Level } from '@/db/queries/series';
import { durationText, figure, unitText } from '@/lib/format';

export type Units = { dose: string; doseLabel: string; control: string; controlLabel: string };

const sentence = (text: string) => text.charAt(0).toUpperCase() + text.slice(1);

/** The levels in order of work: dose in bench units, control value beside it, times. */
export function LevelTable({ levels, units }: { levels: Level[]; units: Units }) {
  const columns: Column<Level>[] = [
    { key: 'position', head: 'Order', kind: 'figure', cell: (l) => l.position },
    {
      key: 'dose',
      head: sentence(units.doseLabel),
      unit: unitText(units.dose),
      kind: 'figure',
      strong: true,
      cell: (l) => figure(l.dose, 4),
    },
    {
      key: 'control',
      head: sentence(units.controlLabel),
      unit: unitText(units.control),
      kind: 'figure',
      cell: (l) => figure(l.control, 3),
    },
    { key: 'purpose', head: 'Purpose', cell: (l) => l.purpose },
    {
      key: 'replicates',
      head: 'Preparations',
      kind: 'figure',
      cell: (l) => l.replicates,
    },
    {
      key: 'settle',
      head: 'Settle',
      kind: 'figure',
      cell: (l) => durationText(l.settleMinutes),
    },
    {
      key: 'record',
      head: 'Record',
      kind: 'figure',
      cell: (l) => durationText(l.recordMinutes),
    },
    {
      key: 'interval',
      head: 'A reading every',
      kind: 'figure',
      cell: (l) => durationText(l.intervalMinutes),
    },
    {
      key: 'notes',
      head: 'Notes',
      cell: (l) => <span className="block min-w-52">{l.notes.join(' ')}</span>,
    },
  ];
  return (
    <DataTable
      caption="Levels of the series in order of work"
      columns={columns}
      rows={levels}
      rowKey={(l) => l.id}
    />
  );
}
