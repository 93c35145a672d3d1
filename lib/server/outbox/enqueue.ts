import { and, eq, inArray } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import type { Conn } from '@/db/client';
import { type OutboxKind, outbox } from '@/db/schema';

/** Minutes before a session at which its person is reminded. */
export const REMINDER_OFFSETS = [24 * 60, 60] as const;
/** A reminder that would be due longer ago than this is not written. */
const GRACE_MINUTES = 5;

/**
 * Writes the reminders of one session, in the transaction that lays or moves it. The slot names
 * session, recipient, offset and sequence, so that the same reminder cannot stand twice.
 */
export async function queueReminders(
  tx: Conn,
  of: {
    labId: string;
    studyId: string;
    sessionId: string;
    personId: string;
    startsAt: Date;
    sequence: number;
    now: Date;
  },
): Promise<void> {
  const rows = REMINDER_OFFSETS.map((offset) => ({
    id: uuid(),
    labId: of.labId,
    kind: 'reminder' as const,
    slot: `${of.sessionId}:${of.personId}:${offset}:${of.sequence}`,
    sessionId: of.sessionId,
    studyId: of.studyId,
    recipientId: of.personId,
    sequence: of.sequence,
    data: { offsetMinutes: offset },
    dueAt: new Date(of.startsAt.getTime() - offset * 60_000),
  })).filter((row) => row.dueAt.getTime() > of.now.getTime() - GRACE_MINUTES * 60_000);
  if (rows.length > 0) {
    await tx.insert(outbox).ignore().values(rows);
  }
}

/** Unsent reminders of a moved, cancelled or suspended session die with it. */
export async function retireSession(
  tx: Conn,
  of: { labId: string; sessionIds: string[] },
): Promise<void> {
  if (of.sessionIds.length === 0) return;
  await tx
    .update(outbox)
    .set({ state: 'dead', error: 'the session changed before this was due' })
    .where(
      and(
        eq(outbox.labId, of.labId),
        eq(outbox.state, 'waiting'),
        eq(outbox.kind, 'reminder'),
        inArray(outbox.sessionId, of.sessionIds),
      ),
    );
}

/** A mail that is due at once. `slot` makes it unique: the same slot is never sent twice. */
export async function queueNotice(
  tx: Conn,
  notice: {
    labId: string;
    kind: Exclude<OutboxKind, 'reminder'>;
    slot: string;
    recipientId: string;
    studyId?: string | null;
    sessionId?: string | null;
    sequence?: number;
    data?: Record<string, unknown>;
    now: Date;
  },
): Promise<void> {
  await tx
    .insert(outbox)
    .ignore()
    .values({
      id: uuid(),
      labId: notice.labId,
      kind: notice.kind,
      slot: notice.slot.slice(0, 180),
      recipientId: notice.recipientId,
      studyId: notice.studyId ?? null,
      sessionId: notice.sessionId ?? null,
      sequence: notice.sequence ?? 0,
      data: notice.data ?? {},
      dueAt: notice.now,
    });
}
