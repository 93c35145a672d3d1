import { and, eq } from 'drizzle-orm';
import type { Transaction } from '@/db/client';
import { booking, run, session, sessionVisit, study, user, visit } from '@/db/schema';
import { AppError, notFound } from '../errors';
import { lockCalendar } from './lock-calendar';

/** Locks the lab's calendar and one session of it; refuses one changed since it was read, naming by whom. */
export async function lockSession(
  tx: Transaction,
  of: { labId: string; sessionId: string; revision?: number },
) {
  await lockCalendar(tx, of);
  const [row] = await tx
    .select({ session, booking, run, study })
    .from(session)
    .innerJoin(booking, eq(booking.id, session.bookingId))
    .innerJoin(run, eq(run.id, booking.runId))
    .innerJoin(study, eq(study.id, session.studyId))
    .where(and(eq(session.id, of.sessionId), eq(session.labId, of.labId)))
    .for('update');
  if (!row) throw notFound('session');
  if (of.revision !== undefined && row.session.revision !== of.revision) {
    const [by] = row.session.changedBy
      ? await tx.select({ name: user.name }).from(user).where(eq(user.id, row.session.changedBy))
      : [];
    throw new AppError(
      'conflict',
      `${by?.name ?? 'Somebody'} changed this session meanwhile. Nothing was overwritten.`,
      { mend: 'Look at where it stands now, then decide again.' },
    );
  }
  const visits = await tx
    .select({ visit })
    .from(visit)
    .innerJoin(sessionVisit, eq(sessionVisit.visitId, visit.id))
    .where(and(eq(sessionVisit.sessionId, row.session.id), eq(sessionVisit.labId, of.labId)));
  return { ...row, visits: visits.map((v) => v.visit) };
}
