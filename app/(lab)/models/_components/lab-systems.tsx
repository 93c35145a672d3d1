import Link from 'next/link';
import { type Column, DataTable } from '@/components/ui';
import type { StudyRow } from '@/db/queries/studies';
import type { SystemOutline } from '@/db/queries/systems';
import { figure, withUnit } from '@/lib/format';

type Row = { study: StudyRow; system: SystemOutline };

const range = ({ system }: Row) =>
  `${system.controlSymbol}, ${figure(system.from)}\u00a0to\u00a0${withUnit(figure(system.to), system.controlUnit)}`;

const columns = (startable: boolean): Column<Row>[] => [
  {
    key: 'study',
    head: 'Study',
    strong: true,
    cell: ({ study }) => (
      <Link
        href={`/studies/${study.id}/system`}
        className="block py-1.5 leading-5 underline-offset-4 hover:underline"
      >
        {study.title}
      </Link>
    ),
  },
  { key: 'name', head: 'Model', cell: ({ system }) => system.name },
  { key: 'version', head: 'Version', cell: ({ system }) => `v${system.number}` },
  { key: 'control', head: 'Control parameter', cell: range },
  ...(startable
    ? [
        {
          key: 'start',
          head: <span className="sr-only">Start from it</span>,
          cell: ({ study }: Row) => (
            <Link
              href={`/studies/new?study=${study.id}`}
              className="whitespace-nowrap underline underline-offset-4"
            >
              Start a study from this
            </Link>
          ),
        },
      ]
    : []),
];

/** The newest system of each of the lab's studies. */
export function LabSystems(props: {
  studies: StudyRow[];
  systems: Map<string, SystemOutline>;
  startable: boolean;
}) {
  const rows = props.studies.flatMap((study) => {
    const system = props.systems.get(study.id);
    return system ? [{ study, system }] : [];
  });
  return (
    <DataTable
      caption="Systems of the lab’s studies"
      columns={columns(props.startable)}
      rows={rows}
      rowKey={(row) => row.study.id}
      empty="None yet: a study’s system appears here as soon as the study is started."
    />
  );
}
