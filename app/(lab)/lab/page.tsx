import type { Metadata } from 'next';
import { type Column, DataTable } from '@/components/ui';
import { absences, hoursOfLab, people, rigs } from '@/db/queries/people';
import { stampText } from '@/lib/format';
import { explainHours } from '@/lib/planner/lay-out/explain-hours';
import { database } from '@/lib/server/database';
import { pageMember } from '@/lib/server/member';

export const metadata: Metadata = { title: 'Lab' };

type Person = Awaited<ReturnType<typeof people>>[number] & { works: string };
type Rig = Awaited<ReturnType<typeof rigs>>[number] & { opens: string };
type Absence = Awaited<ReturnType<typeof absences>>[number];

const personColumns: Column<Person>[] = [
  { key: 'name', head: 'Name', strong: true, cell: (p) => p.name },
  { key: 'role', head: 'Role', cell: (p) => p.role },
  { key: 'hours', head: 'Works', cell: (p) => p.works },
  { key: 'skills', head: 'Skills', cell: (p) => p.skills.join(', ') },
];
const rigColumns: Column<Rig>[] = [
  { key: 'name', head: 'Rig', strong: true, cell: (r) => r.name },
  { key: 'place', head: 'Place', cell: (r) => r.place },
  { key: 'capacity', head: 'Runs at a time', kind: 'figure', cell: (r) => r.capacity },
  { key: 'opens', head: 'Open', cell: (r) => r.opens },
  {
    key: 'records',
    head: 'Readings',
    cell: (r) => (r.recordsItself ? 'records by itself' : 'drawn by hand'),
  },
  { key: 'skills', head: 'Skills needed', cell: (r) => r.skills.join(', ') },
];

/** Who works here, when, and on what. */
export default async function LabPage() {
  const member = await pageMember();
  const db = database();
  const of = { labId: member.labId };
  const zone = member.lab.timeZone;
  const [staff, allRigs, hours, away] = await Promise.all([
    people(db, of),
    rigs(db, of),
    hoursOfLab(db, of),
    absences(db, { ...of, since: new Date() }),
  ]);
  const words = (rows: typeof hours, none: string) =>
    rows.length > 0
      ? explainHours(
          rows.map(({ rrule, from, to }) => ({ rrule, from, to })),
          zone,
        )
      : none;
  const nameOf = new Map(staff.map((p) => [p.userId, p.name]));
  const awayColumns: Column<Absence>[] = [
    {
      key: 'who',
      head: 'Who',
      strong: true,
      cell: (a) => (a.userId ? (nameOf.get(a.userId) ?? '') : 'The whole lab'),
    },
    { key: 'from', head: 'From', cell: (a) => stampText(a.from, zone) },
    { key: 'to', head: 'Until', cell: (a) => stampText(a.to, zone) },
    { key: 'reason', head: 'Why', cell: (a) => a.reason },
  ];
  return (
    <div className="flex flex-col gap-6">
      <DataTable
        caption="People of the lab"
        columns={personColumns}
        rows={staff.map((p) => ({
          ...p,
          works: words(
            hours.filter((h) => h.userId === p.userId),
            'no bench hours',
          ),
        }))}
        rowKey={(p) => p.userId}
      />
      <DataTable
        caption="Rigs of the lab"
        columns={rigColumns}
        rows={allRigs
          .filter((r) => !r.retired)
          .map((r) => ({
            ...r,
            opens: words(
              hours.filter((h) => h.rigId === r.id),
              'always',
            ),
          }))}
        rowKey={(r) => r.id}
        empty="No rigs yet."
      />
      <DataTable
        caption="Absences and closures to come"
        columns={awayColumns}
        rows={away}
        rowKey={(a) => a.id}
        empty="Nobody is away and nothing is closed."
      />
    </div>
  );
}
