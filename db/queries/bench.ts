import { and, asc, desc, eq, isNull } from 'drizzle-orm';
import type { Conn } from '../client';
import {
  booking,
  preparation,
  remark,
  rig,
  run,
  session,
  sessionVisit,
  stopOrder,
  study,
  user,
  visit,
} from '../schema';

/** Everything that the bench card of one session shows; null when it is not this lab's. */
export async function benchSession(conn: Conn, of: { labId: string; sessionId: string }) {
  const [row] = await conn
    .select({ session, booking, run, study, preparation, rig, person: user.name })
    .from(session)
    .innerJoin(booking, eq(booking.id, session.bookingId))
    .innerJoin(run, eq(run.id, booking.runId))
    .innerJoin(study, eq(study.id, session.studyId))
    .innerJoin(preparation, eq(preparation.id, run.preparationId))
    .innerJoin(rig, eq(rig.id, session.rigId))
    .innerJoin(user, eq(user.id, session.personId))
    .where(and(eq(session.id, of.sessionId), eq(session.labId, of.labId)))
    .limit(1);
  if (!row) return null;
  const visits = await conn
    .select({ visit })
    .from(visit)
    .innerJoin(sessionVisit, eq(sessionVisit.visitId, visit.id))
    .where(and(eq(sessionVisit.sessionId, of.sessionId), eq(sessionVisit.labId, of.labId)))
    .orderBy(asc(visit.atMinutes));
  const remarks = await conn
    .select({ remark, by: user.name })
    .from(remark)
    .innerJoin(user, eq(user.id, remark.byId))
    .where(and(eq(remark.runId, row.run.id), eq(remark.labId, of.labId)))
    .orderBy(desc(remark.createdAt))
    .limit(20);
  const stops = await conn
    .select({ stop: stopOrder, by: user.name })
    .from(stopOrder)
    .innerJoin(user, eq(user.id, stopOrder.byId))
    .where(
      and(
        eq(stopOrder.studyId, row.study.id),
        eq(stopOrder.labId, of.labId),
        isNull(stopOrder.liftedAt),
        isNull(stopOrder.slippedAt),
      ),
    )
    .orderBy(desc(stopOrder.createdAt));
  return { ...row, visits: visits.map((v) => v.visit), remarks, stops };
}
