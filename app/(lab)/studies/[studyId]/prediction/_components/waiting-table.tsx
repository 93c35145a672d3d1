import { type Column, DataTable } from '@/components/ui';
import { figure, modelTimeText, NARROW_SPACE, unitText } from '@/lib/format';
import type { SettlingRow } from '@/lib/server/predictions/settling';

type Row = SettlingRow & { dose: number | null };
type Units = { control: string; time: string; dose: string; doseLabel: string };

function waiting({ side, from, to }: Row, timeUnit: string): string {
  if (side === 'oscillating') return `${modelTimeText(from, timeUnit, 2)} to grow`;
  return `${figure(from, 2)}–${figure(to, 2)}${NARROW_SPACE}${timeUnit} to settle`;
}

const columns = ({ control, time, dose, doseLabel }: Units): Column<Row>[] => [
  {
    key: 'control',
    head: 'Level',
    unit: unitText(control) || undefined,
    kind: 'figure',
    strong: true,
    cell: (r) => figure(r.control),
  },
  {
    key: 'dose',
    head: doseLabel,
    unit: unitText(dose),
    kind: 'figure',
    cell: (r) =>
      r.dose === null ? <span className="font-sans">unreachable</span> : figure(r.dose),
  },
  { key: 'side', head: 'There it is', cell: (r) => r.side },
  {
    key: 'rate',
    head: 'Growth rate',
    unit: `/${unitText(time)}`,
    kind: 'figure',
    cell: (r) => figure(r.growthRate, 2),
  },
  { key: 'wait', head: 'Wait', kind: 'figure', cell: (r) => waiting(r, time) },
];

/** How long a level near an onset needs before its record says anything. */
export function WaitingTable({ rows, units }: { rows: Row[]; units: Units }) {
  return (
    <DataTable
      caption="How long to wait near the onset"
      columns={columns(units)}
      rows={rows}
      rowKey={(r) => String(r.control)}
    />
  );
}
