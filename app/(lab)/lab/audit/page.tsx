import { and, desc, eq, lt } from 'drizzle-orm';
import type { Metadata } from 'next';
import { type Column, DataTable, KeyLink } from '@/components/ui';
import { auditEvent, study, user } from '@/db/schema';
import { stampText } from '@/lib/format';
import { database } from '@/lib/server/database';
import { may, pageMember } from '@/lib/server/member';
import { NotYours } from '../_components/not-yours';

export const metadata: Metadata = { title: 'Audit trail' };

const PAGE = 100;
type Row = { id: string; at: Date; who: string; event: string; study: string; data: string };

const columns = (zone: string): Column<Row>[] => [
  { key: 'at', head: 'When', unit: zone, strong: true, cell: (r) => stampText(r.at, zone) },
  { key: 'who', head: 'Who', cell: (r) => r.who },
  { key: 'event', head: 'What', cell: (r) => r.event.replace('.', ': ').replaceAll('-', ' ') },
  { key: 'study', head: 'Study', cell: (r) => r.study },
  {
    key: 'data',
    head: 'Particulars',
    cell: (r) => <span className="text-caption break-all text-ink2">{r.data}</span>,
  },
];

/** "moved from 09:00": an event's particulars as they were stored. */
function particulars(data: Record<string, unknown>): string {
  return Object.entries(data)
    .map(([key, value]) => `${key} ${typeof value === 'object' ? JSON.stringify(value) : value}`)
    .join(', ');
}

/** Who did what when; nothing here can be changed. */
export default async function AuditPage({
  searchParams,
}: {
  searchParams: Promise<{ before?: string }>;
}) {
  const member = await pageMember();
  if (!may(member, 'see audit')) {
    return (
      <NotYours
        member={member}
        title="Not yours to see"
        who="The lab head reads the audit trail."
      />
    );
  }
  const before = new Date((await searchParams).before ?? '');
  const rows = await database()
    .select({ entry: auditEvent, who: user.name, study: study.title })
    .from(auditEvent)
    .leftJoin(user, eq(user.id, auditEvent.actorId))
    .leftJoin(study, eq(study.id, auditEvent.studyId))
    .where(
      and(
        eq(auditEvent.labId, member.labId),
        Number.isNaN(before.getTime()) ? undefined : lt(auditEvent.at, before),
      ),
    )
    .orderBy(desc(auditEvent.at), desc(auditEvent.id))
    .limit(PAGE);
  const last = rows.at(-1);
  return (
    <div className="flex flex-col gap-4">
      <DataTable
        caption="Audit trail, the newest first"
        columns={columns(member.lab.timeZone)}
        rows={rows.map(({ entry, who, study: title }) => ({
          id: entry.id,
          at: entry.at,
          who: who ?? 'Swaypoint',
          event: entry.event,
          study: title ?? '',
          data: particulars(entry.data),
        }))}
        rowKey={(r) => r.id}
        empty="Nothing has been recorded yet."
      />
      {rows.length === PAGE && last ? (
        <div>
          <KeyLink href={`/lab/audit?before=${last.entry.at.toISOString()}`}>Earlier</KeyLink>
        </div>
      ) : null}
    </div>
  );
}
