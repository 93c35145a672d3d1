import { and, eq } from 'drizzle-orm';
import { stopOrder } from '@/db/schema';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError, notFound } from '../errors';
import { lockCalendar } from '../sessions/lock-calendar';
import { releaseSuspended } from './release';

/** The head lifts a stop, with a reason; what another standing stop covers stays held by that one. */
export async function liftStop(
  { db, member, now }: ActionContext,
  input: { stopId: string; reason: string },
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
    await tx
      .update(stopOrder)
      .set({ liftedAt: now, liftedBy: member.userId, liftReason: input.reason })
      .where(eq(stopOrder.id, order.id));
    await releaseSuspended(tx, order, now);
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'stop.lifted',
      studyId: order.studyId,
      subjectId: order.id,
      data: { reason: input.reason },
    });
    return { stopId: order.id };
  });
}
