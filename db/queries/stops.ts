import { and, desc, eq, isNull } from 'drizzle-orm';
import type { Conn } from '../client';
import { stopOrder, user } from '../schema';

/** Stops of a study that stand, the newest first. */
export async function standingStops(conn: Conn, of: { labId: string; studyId: string }) {
  return conn
    .select({ stop: stopOrder, by: user.name })
    .from(stopOrder)
    .innerJoin(user, eq(user.id, stopOrder.byId))
    .where(
      and(
        eq(stopOrder.labId, of.labId),
        eq(stopOrder.studyId, of.studyId),
        isNull(stopOrder.liftedAt),
        isNull(stopOrder.slippedAt),
      ),
    )
    .orderBy(desc(stopOrder.createdAt));
}
