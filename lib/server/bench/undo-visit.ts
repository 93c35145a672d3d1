import { and, eq, sql } from 'drizzle-orm';
import type { z } from 'zod';
import { booking, reading, run, session, visit } from '@/db/schema';
import type { undoForm } from '@/lib/contracts/forms/bench';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError, notFound } from '../errors';
import { askEvidence } from '../evidence/ask-evidence';
import { lockSession } from '../sessions/lock-session';
import { shiftWindows, stayOf } from './run-times';

/** Seconds in which one's own press may be taken back. */
export const UNDO_SECONDS = 60;

/** Takes one's own press of the last minute back. The trail keeps both the press and its undoing. */
export async function undoVisit(
  { db, member, now }: ActionContext,
  input: z.output<typeof undoForm>,
) {
  return db.transaction(async (tx) => {
    const locked = await lockSession(tx, { labId: member.labId, sessionId: input.sessionId });
    const of = locked.visits.find((v) => v.id === input.visitId);
    if (!of) throw notFound('visit');
    if (!of.doneAt) return { visitId: of.id };
    const age = (now.getTime() - of.doneAt.getTime()) / 1000;
    if (of.doneBy !== member.userId || age > UNDO_SECONDS + 5) {
      throw new AppError('forbidden', 'The minute for taking this back is over.', {
        mend: 'Write a note; nothing recorded is ever removed later.',
      });
    }
    if (locked.session.state === 'suspended' || locked.run.state === 'suspended') {
      throw new AppError('conflict', 'A stop holds this session.');
    }
    if (locked.session.state === 'cancelled' || locked.run.state === 'lost') {
      throw new AppError('conflict', 'This run has ended meanwhile; what was recorded stays.');
    }
    await tx
      .update(visit)
      .set({ doneAt: null, doneBy: null, outcome: null, remark: null })
      .where(eq(visit.id, of.id));
    const [gone] = await tx
      .delete(reading)
      .where(and(eq(reading.visitId, of.id), eq(reading.labId, member.labId)));
    if (of.kind === 'set dose') {
      await shiftWindows(tx, locked.run, locked.run.setAt, 'back');
      await tx
        .update(run)
        .set({ state: 'planned', setAt: null, setBy: null, deliveredDose: null, endedAt: null })
        .where(eq(run.id, locked.run.id));
    } else if (locked.run.state === 'recorded') {
      await tx
        .update(run)
        .set({ state: 'recording', endedAt: null })
        .where(eq(run.id, locked.run.id));
    }
    const stay = stayOf(locked.run, of.kind === 'set dose' ? null : locked.run.setAt);
    await tx
      .update(booking)
      .set({ state: 'held', ...stay })
      .where(eq(booking.id, locked.booking.id));
    await tx
      .update(session)
      .set({ state: 'started', doneAt: null, revision: sql`${session.revision} + 1` })
      .where(eq(session.id, locked.session.id));
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'session.step',
      studyId: locked.study.id,
      subjectId: of.id,
      data: { undone: true, was: of.outcome, at: of.doneAt.toISOString() },
    });
    if (gone.affectedRows > 0) {
      await askEvidence(tx, {
        labId: member.labId,
        studyId: locked.study.id,
        askedBy: member.userId,
      });
    }
    return { visitId: of.id };
  });
}
