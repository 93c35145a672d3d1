import { and, asc, eq, inArray, isNull, lt, notExists } from 'drizzle-orm';
import type { Conn } from '../client';
import {
  booking,
  type Role,
  reading,
  run,
  seriesVersion,
  session,
  stopOrder,
  study,
  user,
} from '../schema';

/** Something that waits for this person, with the place where it is done. */
export type Waiting = {
  kind: 'approval' | 'stop' | 'readings' | 'missed';
  id: string;
  studyId: string;
  study: string;
  text: string;
  href: string;
  since: Date;
};

type Of = { labId: string; userId: string; role: Role; now: Date };

async function approvals(conn: Conn, of: Of): Promise<Waiting[]> {
  const rows = await conn
    .select({ version: seriesVersion, study: study.title, by: user.name })
    .from(seriesVersion)
    .innerJoin(study, eq(study.id, seriesVersion.studyId))
    .innerJoin(user, eq(user.id, seriesVersion.createdBy))
    .where(and(eq(seriesVersion.labId, of.labId), eq(seriesVersion.state, 'submitted')));
  return rows.map(({ version, study: title, by }) => ({
    kind: 'approval',
    id: version.id,
    studyId: version.studyId,
    study: title,
    text: `${by} asks you to approve version ${version.number} of the series`,
    href: `/studies/${version.studyId}/series`,
    since: version.submittedAt ?? version.createdAt,
  }));
}

async function standingStops(conn: Conn, of: Of): Promise<Waiting[]> {
  const rows = await conn
    .select({ stop: stopOrder, study: study.title, by: user.name })
    .from(stopOrder)
    .innerJoin(study, eq(study.id, stopOrder.studyId))
    .innerJoin(user, eq(user.id, stopOrder.byId))
    .where(
      and(eq(stopOrder.labId, of.labId), isNull(stopOrder.liftedAt), isNull(stopOrder.slippedAt)),
    );
  return rows.map(({ stop, study: title, by }) => ({
    kind: 'stop',
    id: stop.id,
    studyId: stop.studyId,
    study: title,
    text: `${by} pressed stop; lift it or leave it`,
    href: `/studies/${stop.studyId}/sessions`,
    since: stop.createdAt,
  }));
}

/** Runs whose record was collected but never uploaded: for whoever set the dose, and for planners. */
async function missingReadings(conn: Conn, of: Of): Promise<Waiting[]> {
  const rows = await conn
    .select({ run, study: study.title })
    .from(run)
    .innerJoin(study, eq(study.id, run.studyId))
    .where(
      and(
        eq(run.labId, of.labId),
        eq(run.state, 'recorded'),
        of.role === 'technician' ? eq(run.setBy, of.userId) : undefined,
        notExists(
          conn.select({ one: reading.id }).from(reading).where(eq(reading.runId, run.id)).limit(1),
        ),
      ),
    )
    .orderBy(asc(run.endedAt))
    .limit(50);
  return rows
    .filter((r) => r.run.setAt !== null)
    .map(({ run: r, study: title }) => ({
      kind: 'readings',
      id: r.id,
      studyId: r.studyId,
      study: title,
      text: `Run ${r.number} is recorded, its readings are missing`,
      href: `/studies/${r.studyId}/readings?run=${r.id}`,
      since: r.endedAt ?? r.setAt ?? r.createdAt,
    }));
}

/** Sessions of mine whose time went by without a start. */
async function overdue(conn: Conn, of: Of): Promise<Waiting[]> {
  const rows = await conn
    .select({ session, study: study.title, number: run.number })
    .from(session)
    .innerJoin(study, eq(study.id, session.studyId))
    .innerJoin(booking, eq(booking.id, session.bookingId))
    .innerJoin(run, eq(run.id, booking.runId))
    .where(
      and(
        eq(session.labId, of.labId),
        eq(session.personId, of.userId),
        inArray(session.state, ['planned', 'missed']),
        lt(session.endsAt, of.now),
      ),
    )
    .orderBy(asc(session.startsAt))
    .limit(50);
  return rows.map(({ session: s, study: title, number }) => ({
    kind: 'missed',
    id: s.id,
    studyId: s.studyId,
    study: title,
    text: `Run ${number}: the session was not recorded`,
    href: `/sessions/${s.id}`,
    since: s.startsAt,
  }));
}

/** Everything that waits for one member, the longest waiting first. */
export async function waitingFor(conn: Conn, of: Of): Promise<Waiting[]> {
  const parts: Promise<Waiting[]>[] = [];
  if (of.role === 'head') parts.push(approvals(conn, of), standingStops(conn, of));
  if (of.role !== 'observer') parts.push(missingReadings(conn, of), overdue(conn, of));
  const all = (await Promise.all(parts)).flat();
  return all.sort((a, b) => a.since.getTime() - b.since.getTime());
}
