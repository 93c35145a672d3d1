import type { Metadata } from 'next';
import { people } from '@/db/queries/people';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { NotYours } from '../_components/not-yours';
import { PeopleEditor } from './_components/people-editor';

export const metadata: Metadata = { title: 'People' };

export default async function PeoplePage() {
  const member = await pageMember();
  if (!may(member, 'manage people')) {
    return (
      <NotYours member={member} title="Not yours to change" who="The lab head manages people." />
    );
  }
  const staff = await people(database(), { labId: member.labId });
  return (
    <PeopleEditor
      people={staff.map((p) => ({
        userId: p.userId,
        name: p.name,
        email: p.email,
        role: p.role,
        skills: p.skills,
        maxMinutesPerDay: p.maxMinutesPerDay,
        minRestHours: p.minRestHours,
      }))}
    />
  );
}
