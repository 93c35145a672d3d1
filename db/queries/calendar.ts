import { and, asc, eq, gt, inArray, lt, sql } from 'drizzle-orm';
import type { Conn } from '../client';
import { booking, rig, run, session, sessionVisit, study, user, visit } from '../schema';

/** The lab's sessions that overlap a span, with what the calendar shows of them. */
export async function sessionsBetween(
  conn: Conn,
  of: { labId: string; from: Date; to: Date; personId?: string; studyId?: string },
) {
  return conn
    .select({
      id: session.id,
      studyId: session.studyId,
      study: study.title,
      simulated: study.simulated,
      rigId: session.rigId,
      rig: rig.name,
      personId: session.personId,
      person: user.name,
      startsAt: session.startsAt,
      endsAt: session.endsAt,
      state: session.state,
      sequence: session.sequence,
      revision: session.revision,
      bookingId: session.bookingId,
      runId: run.id,
      runNumber: run.number,
      runState: run.state,
      setAt: run.setAt,
      plannedStart: run.plannedStart,
      dose: run.dose,
      control: run.control,
      doseUnit: study.doseUnit,
    })
    .from(session)
    .innerJoin(study, eq(study.id, session.studyId))
    .innerJoin(rig, eq(rig.id, session.rigId))
    .innerJoin(user, eq(user.id, session.personId))
    .innerJoin(booking, eq(booking.id, session.bookingId))
    .innerJoin(run, eq(run.id, booking.runId))
    .where(
      and(
        eq(session.labId, of.labId),
        lt(session.startsAt, of.to),
        gt(session.endsAt, of.from),
        of.personId ? eq(session.personId, of.personId) : undefined,
        of.studyId ? eq(session.studyId, of.studyId) : undefined,
      ),
    )
    .orderBy(asc(session.startsAt));
}

/** The visits of some sessions, in the order of the run. */
export async function visitsOfSessions(conn: Conn, of: { labId: string; sessionIds: string[] }) {
  if (of.sessionIds.length === 0) return [];
  return conn
    .select({ sessionId: sessionVisit.sessionId, visit })
    .from(sessionVisit)
    .innerJoin(visit, eq(visit.id, sessionVisit.visitId))
    .where(and(eq(sessionVisit.labId, of.labId), inArray(sessionVisit.sessionId, of.sessionIds)))
    .orderBy(asc(visit.atMinutes));
}

/** Occupations of rigs that end after `from`, with whose run they are. */
export async function heldBookings(conn: Conn, of: { labId: string; from: Date }) {
  return conn
    .select({
      id: booking.id,
      rigId: booking.rigId,
      runId: booking.runId,
      from: booking.from,
      to: booking.to,
      studyId: run.studyId,
      runState: run.state,
      preparationId: run.preparationId,
    })
    .from(booking)
    .innerJoin(run, eq(run.id, booking.runId))
    .where(and(eq(booking.labId, of.labId), eq(booking.state, 'held'), gt(booking.to, of.from)));
}

/** Changes with every change of the lab's calendar. */
export async function calendarStamp(conn: Conn, of: { labId: string }): Promise<string> {
  const [row] = await conn
    .select({
      count: sql<string>`count(*)`,
      revisions: sql<string>`coalesce(sum(${session.revision}), 0)`,
    })
    .from(session)
    .where(eq(session.labId, of.labId));
  return `${row?.count}:${row?.revisions}`;
}
