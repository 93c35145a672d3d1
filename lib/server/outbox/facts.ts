import { and, asc, eq, gte, inArray } from 'drizzle-orm';
import type { Conn } from '@/db/client';
import { lab, type outbox, rig, run, session, sessionVisit, study, user, visit } from '@/db/schema';

export type OutboxRow = typeof outbox.$inferSelect;

/** One session as a mail tells it. */
export type SessionFacts = {
  id: string;
  state: string;
  sequence: number;
  startsAt: Date;
  endsAt: Date;
  personId: string;
  study: string;
  rig: string;
  place: string;
  what: string[];
};

export type MailFacts = {
  kind: OutboxRow['kind'];
  data: Record<string, unknown>;
  recipient: { name: string; email: string };
  lab: { name: string; place: string; timeZone: string; demo: boolean };
  study: { id: string; title: string } | null;
  sessions: SessionFacts[];
};

async function sessionFacts(conn: Conn, labId: string, ids: string[]): Promise<SessionFacts[]> {
  if (ids.length === 0) return [];
  const rows = await conn
    .select({ session, studyTitle: study.title, rigName: rig.name, place: rig.place })
    .from(session)
    .innerJoin(study, eq(study.id, session.studyId))
    .innerJoin(rig, eq(rig.id, session.rigId))
    .where(and(eq(session.labId, labId), inArray(session.id, ids)))
    .orderBy(asc(session.startsAt));
  const visits = await conn
    .select({ sessionId: sessionVisit.sessionId, label: visit.label, number: run.number })
    .from(sessionVisit)
    .innerJoin(visit, eq(visit.id, sessionVisit.visitId))
    .innerJoin(run, eq(run.id, visit.runId))
    .where(and(eq(sessionVisit.labId, labId), inArray(sessionVisit.sessionId, ids)))
    .orderBy(asc(visit.atMinutes));
  return rows.map(({ session: s, studyTitle, rigName, place }) => ({
    id: s.id,
    state: s.state,
    sequence: s.sequence,
    startsAt: s.startsAt,
    endsAt: s.endsAt,
    personId: s.personId,
    study: studyTitle,
    rig: rigName,
    place,
    what: visits.filter((v) => v.sessionId === s.id).map((v) => `Run ${v.number}: ${v.label}`),
  }));
}

/** The person's sessions of one study that are not over, for the mail that tells of a new lay-out. */
async function comingSessions(conn: Conn, row: OutboxRow, now: Date): Promise<string[]> {
  const rows = await conn
    .select({ id: session.id })
    .from(session)
    .where(
      and(
        eq(session.labId, row.labId),
        eq(session.studyId, row.studyId ?? ''),
        eq(session.personId, row.recipientId),
        eq(session.state, 'planned'),
        gte(session.endsAt, now),
      ),
    )
    .orderBy(asc(session.startsAt))
    .limit(200);
  return rows.map((r) => r.id);
}

/** Everything a mail says, as the database has it at the moment of sending. */
export async function mailFacts(conn: Conn, row: OutboxRow, now: Date): Promise<MailFacts | null> {
  const [person] = await conn
    .select({ user, lab })
    .from(user)
    .innerJoin(lab, eq(lab.id, row.labId))
    .where(eq(user.id, row.recipientId))
    .limit(1);
  if (!person) return null;
  const [about] = row.studyId
    ? await conn
        .select({ id: study.id, title: study.title })
        .from(study)
        .where(and(eq(study.id, row.studyId), eq(study.labId, row.labId)))
        .limit(1)
    : [];
  const ids =
    row.kind === 'assigned' && !row.sessionId
      ? await comingSessions(conn, row, now)
      : row.sessionId
        ? [row.sessionId]
        : [];
  const { name, place, timeZone, demo } = person.lab;
  return {
    kind: row.kind,
    data: row.data,
    recipient: { name: person.user.name, email: person.user.email },
    lab: { name, place, timeZone, demo },
    study: about ?? null,
    sessions: await sessionFacts(conn, row.labId, ids),
  };
}
