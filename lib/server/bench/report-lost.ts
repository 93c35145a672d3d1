import { and, eq, inArray, sql } from 'drizzle-orm';
import type { z } from 'zod';
import { booking, preparation, run, session } from '@/db/schema';
import type { lostForm } from '@/lib/contracts/forms/bench';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { whenInWords } from '../outbox/compose';
import { queueNotice, retireSession } from '../outbox/enqueue';
import { lockSession } from '../sessions/lock-session';
import { pressTime } from './press-time';

/**
 * A preparation that died, was contaminated or did not come: its record is kept up to then, its
 * later runs and sessions are cancelled, its rig is freed.
 */
export async function reportLost(
  { db, member, now }: ActionContext,
  input: z.output<typeof lostForm>,
) {
  return db.transaction(async (tx) => {
    const locked = await lockSession(tx, { labId: member.labId, sessionId: input.sessionId });
    const at = pressTime(input.at, now);
    const { preparationId } = locked.run;
    await tx
      .update(preparation)
      .set({ endedAt: at, endReason: input.reason })
      .where(and(eq(preparation.id, preparationId), eq(preparation.labId, member.labId)));
    const runs = await tx
      .select({ id: run.id, state: run.state })
      .from(run)
      .where(
        and(
          eq(run.preparationId, preparationId),
          inArray(run.state, ['planned', 'tentative', 'settling', 'recording', 'suspended']),
        ),
      )
      .for('update');
    const runIds = runs.map((r) => r.id);
    const begun = runs.filter((r) => r.state === 'settling' || r.state === 'recording');
    for (const r of runs) {
      const state = begun.includes(r) || r.id === locked.run.id ? 'lost' : 'cancelled';
      await tx
        .update(run)
        .set({ state, endedAt: at, endReason: input.reason })
        .where(eq(run.id, r.id));
    }
    if (runIds.length > 0) {
      const gone = await tx
        .select({ session })
        .from(session)
        .innerJoin(booking, eq(booking.id, session.bookingId))
        .where(
          and(
            inArray(booking.runId, runIds),
            inArray(session.state, ['planned', 'started', 'missed', 'suspended']),
          ),
        );
      const ids = gone.map((g) => g.session.id);
      await tx.update(booking).set({ state: 'released' }).where(inArray(booking.runId, runIds));
      if (ids.length > 0) {
        await tx
          .update(session)
          .set({
            state: 'cancelled',
            sequence: sql`${session.sequence} + 1`,
            revision: sql`${session.revision} + 1`,
            changedBy: member.userId,
            changedAt: now,
          })
          .where(inArray(session.id, ids));
      }
      await retireSession(tx, { labId: member.labId, sessionIds: ids });
      for (const { session: s } of gone) {
        if (s.personId === member.userId || s.startsAt < now) continue;
        await queueNotice(tx, {
          labId: member.labId,
          kind: 'cancelled',
          slot: `cancelled:${s.id}`,
          recipientId: s.personId,
          studyId: locked.study.id,
          sessionId: s.id,
          data: {
            by: member.name,
            said: `${whenInWords(s.startsAt, s.endsAt, member.lab.timeZone)}: the preparation is lost (${input.reason})`,
          },
          now,
        });
      }
    }
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'preparation.lost',
      studyId: locked.study.id,
      subjectId: preparationId,
      data: { reason: input.reason, runs: runs.length },
    });
    return { preparationId, runs: runs.length };
  });
}
