import { type Column, DataTable } from '@/components/ui';
import { figure, fineDecimalsFor, fixed, unitText } from '@/lib/format';
import type { SettlingRow } from '@/lib/server/predictions/settling';
import { waitText } from '@/lib/server/predictions/words';

type Row = SettlingRow & { dose: number | null };
type Units = { control: string; time: string; dose: string; doseLabel: string };

function waiting({ side, from, to }: Row, timeUnit: string): string {
  return `${waitText(from, to, timeUnit)} to ${side === 'steady' ? 'settle' : 'grow'}`;
}

/** Decimals that keep neighbouring levels apart, two digits of their smallest gap. */
function decimalsApart(values: (number | null)[]): number {
  const sorted = values.filter((v) => v !== null).sort((a, b) => a - b);
  const gaps = sorted.slice(1).map((v, i) => v - (sorted[i] ?? v));
  return Math.max(0, fineDecimalsFor(Math.min(...gaps.filter((g) => g > 0))));
}

type Decimals = { control: number; dose: number };

const columns = ({ control, time, dose, doseLabel }: Units, decimals: Decimals): Column<Row>[] => [
  {
    key: 'control',
    head: 'Level',
    unit: unitText(control) || undefined,
    kind: 'figure',
    strong: true,
    cell: (r) => fixed(r.control, decimals.control),
  },
  {
    key: 'dose',
    head: doseLabel,
    unit: unitText(dose),
    kind: 'figure',
    cell: (r) =>
      r.dose === null ? (
        <span className="font-sans">unreachable</span>
      ) : (
        fixed(r.dose, decimals.dose)
      ),
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
      columns={columns(units, {
        control: decimalsApart(rows.map((r) => r.control)),
        dose: decimalsApart(rows.map((r) => r.dose)),
      })}
      rows={rows}
      rowKey={(r) => String(r.control)}
    />
  );
}
