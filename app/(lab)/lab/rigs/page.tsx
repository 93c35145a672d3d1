import type { Metadata } from 'next';
import { rigs } from '@/db/queries/people';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { NotYours } from '../_components/not-yours';
import { RigForm } from './_components/rig-form';

export const metadata: Metadata = { title: 'Rigs' };

export default async function RigsPage() {
  const member = await pageMember();
  if (!may(member, 'manage rigs')) {
    return (
      <NotYours member={member} title="Not yours to change" who="The lab head manages rigs." />
    );
  }
  const all = await rigs(database(), { labId: member.labId });
  return (
    <div className="flex flex-col gap-6">
      {all.map((r) => (
        <RigForm
          key={r.id}
          rig={{
            id: r.id,
            name: r.name,
            place: r.place,
            capacity: r.capacity,
            skills: r.skills,
            recordsItself: r.recordsItself,
            retired: r.retired,
          }}
        />
      ))}
      <RigForm rig={null} />
    </div>
  );
}
