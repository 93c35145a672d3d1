import Link from 'next/link';
import { RunVerdict } from '@/components/evidence/run-verdict';
import { type Column, DataTable, IntervalFigure } from '@/components/ui';
import { figure, unitText } from '@/lib/format';
import { markOf, type RunRow } from '@/lib/server/evidence/run-rows';

export type LevelUnits = { control: string; dose: string; doseLabel: string; time: string };

function columns(studyId: string, units: LevelUnits): Column<RunRow>[] {
  return [
    {
      key: 'control',
      head: 'Level',
      unit: unitText(units.control) || undefined,
      kind: 'figure',
      strong: true,
      cell: (r) => figure(r.control, 4),
    },
    {
      key: 'dose',
      head: units.doseLabel,
      unit: unitText(units.dose),
      kind: 'figure',
      cell: (r) => figure(r.dose, 4),
    },
    { key: 'preparation', head: 'Preparation', cell: (r) => r.preparation },
    { key: 'arm', head: 'Arm', cell: (r) => r.direction ?? '\u2013' },
    {
      key: 'verdict',
      head: 'Verdict',
      cell: (r) => <RunVerdict mark={markOf(r)} way={r.way} open={r.state} />,
    },
    {
      key: 'period',
      head: 'Period',
      unit: unitText(units.time),
      kind: 'figure',
      cell: (r) => <IntervalFigure interval={r.period} />,
    },
    {
      key: 'growth',
      head: 'Growth rate',
      unit: `/${unitText(units.time)}`,
      kind: 'figure',
      cell: (r) => <IntervalFigure interval={r.growthRate} />,
    },
    {
      key: 'readings',
      head: 'Readings',
      kind: 'figure',
      cell: (r) =>
        r.readings > 0 ? (
          <Link
            href={`/studies/${studyId}/readings?run=${r.id}`}
            className="underline underline-offset-4"
          >
            {r.readings}
          </Link>
        ) : (
          '\u2013'
        ),
    },
  ];
}

/** Every run that something is known of, in the order of the control parameter. */
export function LevelTable(props: { studyId: string; rows: RunRow[]; units: LevelUnits }) {
  return (
    <DataTable
      caption="Levels and what their runs show"
      columns={columns(props.studyId, props.units)}
      rows={props.rows}
      rowKey={(r) => r.id}
    />
  );
}
