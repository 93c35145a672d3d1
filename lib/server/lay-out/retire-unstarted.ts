import { and, eq, inArray, sql } from 'drizzle-orm';
import type { Transaction } from '@/db/client';
import { booking, run, session } from '@/db/schema';
import { retireSession } from '../outbox/enqueue';

/**
 * Takes a study's unstarted runs off the calendar: runs, bookings and sessions are cancelled, their
 * reminders die. What has begun, and what is done, stays. Returns the sessions that went.
 */
export async function retireUnstarted(
  tx: Transaction,
  of: { labId: string; studyId: string; by: string; now: Date },
): Promise<{ sessionId: string; personId: string; startsAt: Date; endsAt: Date }[]> {
  const runs = await tx
    .select({ id: run.id })
    .from(run)
    .where(
      and(
        eq(run.labId, of.labId),
        eq(run.studyId, of.studyId),
        inArray(run.state, ['planned', 'tentative']),
      ),
    )
    .for('update');
  if (runs.length === 0) return [];
  const runIds = runs.map((r) => r.id);
  const gone = await tx
    .select({
      sessionId: session.id,
      personId: session.personId,
      startsAt: session.startsAt,
      endsAt: session.endsAt,
    })
    .from(session)
    .innerJoin(booking, eq(booking.id, session.bookingId))
    .where(and(inArray(booking.runId, runIds), inArray(session.state, ['planned', 'missed'])))
    .for('update');
  await tx.update(run).set({ state: 'cancelled' }).where(inArray(run.id, runIds));
  await tx.update(booking).set({ state: 'released' }).where(inArray(booking.runId, runIds));
  const sessionIds = gone.map((s) => s.sessionId);
  if (sessionIds.length > 0) {
    await tx
      .update(session)
      .set({
        state: 'cancelled',
        sequence: sql`${session.sequence} + 1`,
        revision: sql`${session.revision} + 1`,
        changedBy: of.by,
        changedAt: of.now,
      })
      .where(inArray(session.id, sessionIds));
    await retireSession(tx, { labId: of.labId, sessionIds });
  }
  return gone;
}
