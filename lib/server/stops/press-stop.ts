import { and, eq, inArray, sql } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { peopleOfRole } from '@/db/queries/people';
import { booking, run, session, stopOrder, study } from '@/db/schema';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { notFound } from '../errors';
import { queueNotice, retireSession } from '../outbox/enqueue';
import { needsReference } from '../series/approvable';
import { lockCalendar } from '../sessions/lock-calendar';
import { stopScope } from './scope';

/** Seconds in which a slip of the hand may be taken back. */
export const SLIP_SECONDS = 10;

/** One press by anybody holds at once, and tells those concerned. */
export async function pressStop(
  { db, member, now }: ActionContext,
  input: { studyId: string; sessionId?: string | undefined },
): Promise<{ stopId: string; runs: number; sessions: number }> {
  return db.transaction(async (tx) => {
    await lockCalendar(tx, member);
    const [about] = await tx
      .select()
      .from(study)
      .where(and(eq(study.id, input.studyId), eq(study.labId, member.labId)))
      .for('update');
    if (!about) throw notFound('study');
    const [at] = input.sessionId
      ? await tx
          .select({ run })
          .from(session)
          .innerJoin(booking, eq(booking.id, session.bookingId))
          .innerJoin(run, eq(run.id, booking.runId))
          .where(
            and(
              eq(session.id, input.sessionId),
              eq(session.labId, member.labId),
              eq(session.studyId, about.id),
            ),
          )
      : [];
    const wholeStudy = needsReference(about.perturbs) || !at;
    const scope = await stopScope(tx, {
      labId: member.labId,
      studyId: about.id,
      preparationId: at?.run.preparationId ?? null,
      dose: at?.run.dose ?? null,
      wholeStudy,
    });
    const runIds = scope.runs.map((r) => r.id);
    const sessionIds = scope.sessions.map((s) => s.id);
    if (runIds.length > 0) {
      await tx.update(run).set({ state: 'suspended' }).where(inArray(run.id, runIds));
    }
    if (sessionIds.length > 0) {
      await tx
        .update(session)
        .set({
          state: 'suspended',
          revision: sql`${session.revision} + 1`,
          changedBy: member.userId,
          changedAt: now,
        })
        .where(inArray(session.id, sessionIds));
    }
    await retireSession(tx, { labId: member.labId, sessionIds });
    const stopId = uuid();
    await tx.insert(stopOrder).values({
      id: stopId,
      labId: member.labId,
      studyId: about.id,
      runId: at?.run.id ?? null,
      sessionId: input.sessionId ?? null,
      preparationId: at?.run.preparationId ?? null,
      dose: at?.run.dose ?? null,
      wholeStudy: wholeStudy ? 1 : 0,
      suspended: { runs: scope.runs, sessions: scope.sessions },
      byId: member.userId,
      createdAt: now,
    });
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'stop.pressed',
      studyId: about.id,
      subjectId: stopId,
      data: { runs: runIds.length, sessions: sessionIds.length, wholeStudy },
    });
    const told = new Set(scope.sessions.map((s) => s.personId));
    const planners = await peopleOfRole(tx, {
      labId: member.labId,
      roles: ['head', 'investigator'],
    });
    for (const p of planners) told.add(p.userId);
    const said = wholeStudy
      ? 'The whole study is held.'
      : `That preparation and every unstarted run at ${at?.run.dose} ${about.doseUnit} or above are held.`;
    for (const recipientId of told) {
      await queueNotice(tx, {
        labId: member.labId,
        kind: 'stop',
        slot: `stop:${stopId}:${recipientId}`,
        recipientId,
        studyId: about.id,
        data: { by: member.name, said },
        // The seconds of a slip pass before anybody is alarmed.
        now: new Date(now.getTime() + SLIP_SECONDS * 1000),
      });
    }
    return { stopId, runs: runIds.length, sessions: sessionIds.length };
  });
}
