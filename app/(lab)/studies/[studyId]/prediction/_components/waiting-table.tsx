import { type Column, DataTable } from '@/components/ui';
import { fineDecimalsFor, fixed, unitText } from '@/lib/format';
import type { SettlingRow } from '@/lib/server/predictions/settling';
import { headText, waitText } from '@/lib/server/predictions/words';

type Row = SettlingRow & { dose: number | null };
type Units = { control: string; time: string; dose: string; doseLabel: string };

function Wait({ row, timeUnit }: { row: Row; timeUnit: string }) {
  const { side, from, to } = row;
  return (
    <span className="whitespace-nowrap">
      {waitText(from, to, timeUnit)} to {side === 'steady' ? 'settle' : 'grow'}
    </span>
  );
}

/** Decimals that keep neighbouring levels apart, two digits of their smallest gap. */
function decimalsApart(values: (number | null)[]): number {
  const sorted = values.filter((v) => v !== null).sort((a, b) => a - b);
  const gaps = sorted.slice(1).map((v, i) => v - (sorted[i] ?? v));
  return Math.max(0, fineDecimalsFor(Math.min(...gaps.filter((g) => g > 0))));
}

/** Decimals that leave the rate nearest to zero two digits, so that the points of all stand in line. */
function decimalsOfRates(rates: number[]): number {
  const smallest = Math.min(...rates.map(Math.abs).filter((r) => r > 0));
  return Math.min(8, Math.max(0, fineDecimalsFor(smallest)));
}

type Decimals = { control: number; dose: number; rate: number };

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
    head: headText(doseLabel),
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
    cell: (r) => fixed(r.growthRate, decimals.rate),
  },
  { key: 'wait', head: 'Wait', cell: (r) => <Wait row={r} timeUnit={time} /> },
];

/** How long a level near an onset needs before its record says anything. */
export function WaitingTable({ rows, units }: { rows: Row[]; units: Units }) {
  return (
    <DataTable
      caption="How long to wait near the onset"
      columns={columns(units, {
        control: decimalsApart(rows.map((r) => r.control)),
        dose: decimalsApart(rows.map((r) => r.dose)),
        rate: decimalsOfRates(rows.map((r) => r.growthRate)),
      })}
      rows={rows}
      rowKey={(r) => String(r.control)}
    />
  );
}
