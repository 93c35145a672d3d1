import type { Metadata } from 'next';
import { absences, hoursOfLab, people, rigs } from '@/db/queries/people';
import { stampText } from '@/lib/format';
import { explainHours } from '@/lib/planner/lay-out/explain-hours';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { NotYours } from '../_components/not-yours';
import { AbsenceEditor } from './_components/absence-editor';
import { HoursEditor } from './_components/hours-editor';

export const metadata: Metadata = { title: 'Hours' };

/** Working hours, opening hours, absences and closures, in plain language. */
export default async function HoursPage() {
  const member = await pageMember();
  if (!may(member, 'manage hours')) {
    return (
      <NotYours member={member} title="Not yours to change" who="The lab head manages hours." />
    );
  }
  const db = database();
  const of = { labId: member.labId };
  const zone = member.lab.timeZone;
  const [staff, allRigs, hours, away] = await Promise.all([
    people(db, of),
    rigs(db, of),
    hoursOfLab(db, of),
    absences(db, { ...of, since: new Date() }),
  ]);
  const rows = (match: (h: (typeof hours)[number]) => boolean) =>
    hours.filter(match).map((h) => ({
      id: h.id,
      words: explainHours({ rrule: h.rrule, from: h.from, to: h.to }, zone),
    }));
  const owners = [
    ...staff
      .filter((p) => p.role !== 'observer')
      .map((p) => ({
        userId: p.userId,
        rigId: null,
        name: p.name,
        none: 'No bench hours: gets no sessions.',
        hours: rows((h) => h.userId === p.userId),
      })),
    ...allRigs
      .filter((r) => !r.retired)
      .map((r) => ({
        userId: null,
        rigId: r.id,
        name: r.name,
        none: 'Always open.',
        hours: rows((h) => h.rigId === r.id),
      })),
  ];
  return (
    <div className="flex flex-col gap-6">
      <AbsenceEditor
        zone={zone}
        people={staff.map((p) => ({ id: p.userId, name: p.name }))}
        absences={away.map((a) => ({
          id: a.id,
          who: staff.find((p) => p.userId === a.userId)?.name ?? 'The whole lab',
          from: stampText(a.from, zone),
          to: stampText(a.to, zone),
          reason: a.reason,
        }))}
      />
      {owners.map((o) => (
        <HoursEditor key={o.userId ?? o.rigId} owner={o} />
      ))}
    </div>
  );
}
