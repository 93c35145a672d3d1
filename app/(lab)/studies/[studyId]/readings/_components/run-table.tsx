import Link from 'next/link';
import { RunVerdict } from '@/components/evidence/run-verdict';
import { type Column, DataTable, IntervalFigure } from '@/components/ui';
import { figure, unitText } from '@/lib/format';
import { markOf, type RunRow } from '@/lib/server/evidence/run-rows';

export type RunUnits = {
  dose: string;
  doseLabel: string;
  control: string;
  controlLabel: string;
  time: string;
  amplitude: string;
};

function columns(studyId: string, units: RunUnits): Column<RunRow>[] {
  return [
    {
      key: 'run',
      head: 'Run',
      strong: true,
      cell: (r) => (
        <Link
          href={`/studies/${studyId}/readings?run=${r.id}`}
          scroll={false}
          className="inline-flex min-h-8 items-center whitespace-nowrap underline underline-offset-4"
        >
          Run {r.number}
        </Link>
      ),
    },
    {
      key: 'dose',
      head: units.doseLabel,
      unit: unitText(units.dose),
      kind: 'figure',
      cell: (r) => figure(r.dose, 4),
    },
    {
      key: 'control',
      head: units.controlLabel,
      unit: unitText(units.control),
      kind: 'figure',
      cell: (r) => figure(r.control, 4),
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
      key: 'amplitude',
      head: 'Amplitude',
      unit: unitText(units.amplitude) || undefined,
      kind: 'figure',
      cell: (r) => <IntervalFigure interval={r.amplitude} />,
    },
    { key: 'readings', head: 'Readings', kind: 'figure', cell: (r) => r.readings },
  ];
}

/** Each run in dose order: what it was given, what came in, what it shows. */
export function RunTable(props: {
  studyId: string;
  rows: RunRow[];
  units: RunUnits;
  chosen: string | null;
}) {
  return (
    <DataTable
      caption="Runs and what their records show"
      columns={columns(props.studyId, props.units)}
      rows={props.rows}
      rowKey={(r) => r.id}
      selectedKey={props.chosen ?? undefined}
    />
  );
}
