import type { ReactNode } from 'react';
import { PageBody, PageHead } from '@/components/frame';
import { may, pageMember } from '@/lib/server/member';
import { LabParts } from './_components/lab-parts';

export default async function LabLayout({ children }: { children: ReactNode }) {
  const member = await pageMember();
  const parts = [
    { href: '/lab', name: 'Overview' },
    ...(may(member, 'manage people') ? [{ href: '/lab/people', name: 'People' }] : []),
    ...(may(member, 'manage rigs') ? [{ href: '/lab/rigs', name: 'Rigs' }] : []),
    ...(may(member, 'manage hours') ? [{ href: '/lab/hours', name: 'Hours' }] : []),
    ...(may(member, 'see audit') ? [{ href: '/lab/audit', name: 'Audit trail' }] : []),
  ];
  return (
    <PageBody>
      <PageHead
        title={member.lab.name}
        subtitle={`${member.lab.place}, ${member.lab.timeZone}${member.lab.demo ? '; people, places and readings are invented' : ''}`}
      />
      {parts.length > 1 ? <LabParts parts={parts} /> : null}
      <div className="mt-6">{children}</div>
    </PageBody>
  );
}
