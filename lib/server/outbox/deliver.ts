import { createHash } from 'node:crypto';
import { and, asc, eq, lte } from 'drizzle-orm';
import nodemailer, { type Transporter } from 'nodemailer';
import type { Db, Transaction } from '@/db/client';
import { outbox, session } from '@/db/schema';
import { audit } from '../audit';
import { env } from '../env';
import { compose } from './compose';
import { mailFacts, type OutboxRow } from './facts';

const MOST_ATTEMPTS = 12;
const LONGEST_BACK_OFF_MS = 3600_000;
const BUSY_MS = 2000;

/** The mail server of the configuration; short time limits, since a row stays locked while it sends. */
export function mailTransport(): Transporter {
  return nodemailer.createTransport(
    { url: env().SMTP_URL, connectionTimeout: 5000, greetingTimeout: 5000, socketTimeout: 10_000 },
    { from: env().MAIL_FROM },
  );
}

/** Derived from the slot alone: a duplicate after a crash carries the same id. */
export const messageIdOf = (slot: string) =>
  `<${createHash('sha256').update(slot).digest('hex').slice(0, 40)}@swaypoint>`;

/**
 * Why a row may no longer be sent; null when it may. `busy` while somebody is changing the session:
 * waiting for them with the row held would be a deadlock with the change, which retires this row.
 */
async function expired(tx: Transaction, row: OutboxRow, now: Date): Promise<string | null> {
  if (row.kind !== 'reminder' || !row.sessionId) return null;
  const [s] = await tx
    .select()
    .from(session)
    .where(eq(session.id, row.sessionId))
    .for('update', { skipLocked: true });
  if (!s) return 'busy';
  if (s.state !== 'planned') return 'the session is no longer planned';
  if (s.sequence !== row.sequence) return 'the session was moved';
  if (s.personId !== row.recipientId) return 'the session belongs to somebody else now';
  if (s.startsAt.getTime() < now.getTime()) return 'the session had begun';
  return null;
}

async function sendOne(tx: Transaction, transport: Transporter, row: OutboxRow, now: Date) {
  const facts = await mailFacts(tx, row, now);
  if (!facts) throw new Error('the recipient is gone');
  const mail = compose(facts, env().PUBLIC_URL, now);
  await transport.sendMail({
    to: { name: facts.recipient.name, address: facts.recipient.email },
    subject: mail.subject,
    text: mail.text,
    html: mail.html,
    messageId: messageIdOf(row.slot),
    headers: { 'X-Swaypoint-Slot': row.slot },
    ...(mail.ical
      ? {
          icalEvent: {
            filename: 'swaypoint.ics',
            method: mail.ical.method,
            content: mail.ical.content,
          },
        }
      : {}),
  });
}

/**
 * Sends the next due mail, if there is one. The row's lock is the claim: whoever holds it sends, a
 * crash gives it back, and a move or cancellation waits for it, so nothing is sent afterwards.
 * @returns what became of it; 'idle' when nothing is due.
 */
export async function deliverNext(
  db: Db,
  transport: Transporter,
  now: Date,
): Promise<'idle' | 'sent' | 'dead' | 'later'> {
  return db.transaction(async (tx) => {
    const [row] = await tx
      .select()
      .from(outbox)
      .where(and(eq(outbox.state, 'waiting'), lte(outbox.dueAt, now)))
      .orderBy(asc(outbox.dueAt))
      .limit(1)
      .for('update', { skipLocked: true });
    if (!row) return 'idle';
    try {
      return await settle(tx, transport, row, now);
    } catch (error) {
      // Whatever went wrong with this row, the ones behind it must not wait for it.
      const text = error instanceof Error ? error.message : String(error);
      return postpone(tx, row, row.attempts + 1, text, now);
    }
  });
}

/** What becomes of a claimed row: sent, put off while its session is being changed, or dead. */
async function settle(
  tx: Transaction,
  transport: Transporter,
  row: OutboxRow,
  now: Date,
): Promise<'sent' | 'dead' | 'later'> {
  const why = await expired(tx, row, now);
  if (why === 'busy') {
    const dueAt = new Date(now.getTime() + BUSY_MS);
    await tx.update(outbox).set({ dueAt }).where(eq(outbox.id, row.id));
    return 'later';
  }
  if (why) {
    await tx.update(outbox).set({ state: 'dead', error: why }).where(eq(outbox.id, row.id));
    return 'dead';
  }
  await sendOne(tx, transport, row, now);
  const messageId = messageIdOf(row.slot);
  await tx
    .update(outbox)
    .set({ state: 'sent', sentAt: now, attempts: row.attempts + 1, messageId, error: null })
    .where(eq(outbox.id, row.id));
  return 'sent';
}

async function postpone(
  tx: Transaction,
  row: OutboxRow,
  attempts: number,
  error: string,
  now: Date,
): Promise<'dead' | 'later'> {
  if (attempts >= MOST_ATTEMPTS) {
    await tx.update(outbox).set({ state: 'dead', attempts, error }).where(eq(outbox.id, row.id));
    await audit(tx, {
      labId: row.labId,
      actorId: null,
      event: 'outbox.refused',
      studyId: row.studyId,
      subjectId: row.recipientId,
      data: { kind: row.kind, error },
    });
    return 'dead';
  }
  const wait = Math.min(2000 * 2 ** attempts, LONGEST_BACK_OFF_MS);
  const dueAt = new Date(now.getTime() + wait);
  await tx.update(outbox).set({ attempts, error, dueAt }).where(eq(outbox.id, row.id));
  return 'later';
}
