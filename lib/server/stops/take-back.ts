import { and, eq } from 'drizzle-orm';
import { stopOrder } from '@/db/schema';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError, notFound } from '../errors';
import { lockCalendar } from '../sessions/lock-calendar';
import { SLIP_SECONDS } from './press-stop';
import { releaseSuspended, silenceStop } from './release';

/** "Slip": whoever pressed stop takes it back within ten seconds; it is recorded. */
export async function takeBackStop(
  { db, member, now }: ActionContext,
  input: { stopId: string },
): Promise<{ stopId: string }> {
  return db.transaction(async (tx) => {
    await lockCalendar(tx, member);
    const [order] = await tx
      .select()
      .from(stopOrder)
      .where(and(eq(stopOrder.id, input.stopId), eq(stopOrder.labId, member.labId)))
      .for('update');
    if (!order) throw notFound('stop');
    if (order.slippedAt || order.liftedAt) {
      throw new AppError('conflict', 'This stop has been taken back or lifted already.');
    }
    // Two seconds more than shown, for the way here.
    const age = (now.getTime() - order.createdAt.getTime()) / 1000;
    if (order.byId !== member.userId || age > SLIP_SECONDS + 2) {
      throw new AppError('forbidden', 'The ten seconds for taking a stop back are over.', {
        mend: 'The lab head can lift it, with a reason.',
      });
    }
    await tx.update(stopOrder).set({ slippedAt: now }).where(eq(stopOrder.id, order.id));
    await releaseSuspended(tx, order, now);
    await silenceStop(tx, order);
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'stop.slipped',
      studyId: order.studyId,
      subjectId: order.id,
    });
    return { stopId: order.id };
  });
}
