import { and, eq, inArray, isNull, like, ne, sql } from 'drizzle-orm';
import type { Transaction } from '@/db/client';
import { booking, outbox, run, session, stopOrder } from '@/db/schema';
import { queueReminders } from '../outbox/enqueue';

type StopOrder = typeof stopOrder.$inferSelect;

type Held = StopOrder['suspended'];

const covers = (
  other: StopOrder,
  r: { preparationId: string; dose: number; before: string | undefined },
) =>
  other.wholeStudy === 1 ||
  r.preparationId === other.preparationId ||
  (other.dose !== null &&
    r.dose >= other.dose &&
    (r.before === 'planned' || r.before === 'tentative'));

/** Hands what another standing stop covers over to that stop; returns what is free to go on. */
async function handOver(tx: Transaction, order: StopOrder): Promise<Held> {
  const ids = order.suspended.runs.map((r) => r.id);
  if (ids.length === 0) return order.suspended;
  const others = await tx
    .select()
    .from(stopOrder)
    .where(
      and(
        eq(stopOrder.labId, order.labId),
        eq(stopOrder.studyId, order.studyId),
        ne(stopOrder.id, order.id),
        isNull(stopOrder.liftedAt),
        isNull(stopOrder.slippedAt),
      ),
    )
    .for('update');
  const runs = await tx.select().from(run).where(inArray(run.id, ids));
  const owners = await tx
    .select({ sessionId: session.id, runId: booking.runId })
    .from(session)
    .innerJoin(booking, eq(booking.id, session.bookingId))
    .where(inArray(booking.runId, ids));
  const runOf = new Map(owners.map((o) => [o.sessionId, o.runId]));
  let free: Held = order.suspended;
  for (const other of others) {
    const taken = new Set(
      runs
        .filter((r) => {
          const before = free.runs.find((f) => f.id === r.id)?.state;
          return before !== undefined && covers(other, { ...r, before });
        })
        .map((r) => r.id),
    );
    if (taken.size === 0) continue;
    const goes = (sessionId: string) => taken.has(runOf.get(sessionId) ?? '');
    const suspended: Held = {
      runs: [...other.suspended.runs, ...free.runs.filter((r) => taken.has(r.id))],
      sessions: [...other.suspended.sessions, ...free.sessions.filter((s) => goes(s.id))],
    };
    await tx.update(stopOrder).set({ suspended }).where(eq(stopOrder.id, other.id));
    free = {
      runs: free.runs.filter((r) => !taken.has(r.id)),
      sessions: free.sessions.filter((s) => !goes(s.id)),
    };
  }
  return free;
}

/**
 * Gives back what a stop suspended, except what another standing stop covers; what was changed
 * otherwise meanwhile stays as it is.
 */
export async function releaseSuspended(
  tx: Transaction,
  order: StopOrder,
  now: Date,
): Promise<void> {
  const free = await handOver(tx, order);
  for (const r of free.runs) {
    await tx
      .update(run)
      .set({ state: r.state })
      .where(and(eq(run.id, r.id), eq(run.labId, order.labId), eq(run.state, 'suspended')));
  }
  for (const s of free.sessions) {
    const [row] = await tx
      .select()
      .from(session)
      .where(and(eq(session.id, s.id), eq(session.labId, order.labId)))
      .for('update');
    if (row?.state !== 'suspended') continue;
    const sequence = row.sequence + 1;
    await tx
      .update(session)
      .set({ state: s.state, sequence, revision: sql`${session.revision} + 1` })
      .where(eq(session.id, s.id));
    if (s.state !== 'planned') continue;
    await queueReminders(tx, {
      labId: order.labId,
      studyId: row.studyId,
      sessionId: row.id,
      personId: row.personId,
      startsAt: row.startsAt,
      sequence,
      now,
    });
  }
}

/** A stop that was a slip of the hand alarms nobody. */
export async function silenceStop(tx: Transaction, order: StopOrder): Promise<void> {
  await tx
    .update(outbox)
    .set({ state: 'dead', error: 'taken back as a slip' })
    .where(
      and(
        eq(outbox.labId, order.labId),
        eq(outbox.state, 'waiting'),
        like(outbox.slot, `stop:${order.id}:%`),
      ),
    );
}
