import { createHash } from 'node:crypto';
import { and, asc, eq, inArray, lt, or, sql } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import type { Conn, Db } from '@/db/client';
import { type JobKind, job } from '@/db/schema';
import { engineVersion } from '@/lib/sim/engine-version';

export const LEASE_MS = 30_000;
export const MOST_ATTEMPTS = 3;
export type Job = typeof job.$inferSelect;

/** Canonical JSON, so that the same question has the same hash whatever order its keys came in. */
function canonical(value: unknown): string {
  if (Array.isArray(value)) return `[${value.map(canonical).join(',')}]`;
  if (value && typeof value === 'object') {
    const entries = Object.entries(value as Record<string, unknown>)
      .filter(([, v]) => v !== undefined)
      .sort(([a], [b]) => (a < b ? -1 : 1))
      .map(([k, v]) => `${JSON.stringify(k)}:${canonical(v)}`);
    return `{${entries.join(',')}}`;
  }
  return JSON.stringify(value) ?? 'null';
}

export const hashOf = (value: unknown) =>
  createHash('sha256').update(canonical(value)).digest('hex');

/**
 * Puts a question in the queue. The same question of the same lab, while queued or running, is one
 * job: a second press gets the first one's id.
 */
export async function enqueue(
  conn: Conn,
  question: {
    labId: string;
    studyId: string;
    askedBy: string;
    kind: JobKind;
    input: Record<string, unknown>;
  },
): Promise<{ jobId: string; joined: boolean }> {
  const inputHash = hashOf({ studyId: question.studyId, input: question.input });
  const activeKey = `${question.labId}:${question.kind}:${inputHash}:${engineVersion}`;
  const jobId = uuid();
  await conn
    .insert(job)
    .values({ id: jobId, ...question, inputHash, engineVersion, activeKey })
    .onDuplicateKeyUpdate({ set: { activeKey } });
  // The row as it is now: a transaction that read earlier would not see somebody else's.
  const [row] = await conn
    .select({ id: job.id })
    .from(job)
    .where(eq(job.activeKey, activeKey))
    .for('update');
  const active = row?.id ?? jobId;
  return { jobId: active, joined: active !== jobId };
}

/** Takes the oldest job that waits, or whose holder fell silent; null when there is none. */
export async function claim(db: Db, owner: string, now: Date): Promise<Job | null> {
  return db.transaction(async (tx) => {
    const [row] = await tx
      .select()
      .from(job)
      .where(or(eq(job.state, 'queued'), and(eq(job.state, 'running'), lt(job.leaseUntil, now))))
      .orderBy(asc(job.createdAt))
      .limit(1)
      .for('update', { skipLocked: true });
    if (!row) return null;
    if (row.attempts >= MOST_ATTEMPTS) {
      await tx
        .update(job)
        .set({
          state: 'failed',
          activeKey: null,
          endedAt: now,
          error: `The calculation was interrupted ${MOST_ATTEMPTS} times and given up. Ask again; if it happens again, make the range or the number of draws smaller.`,
        })
        .where(eq(job.id, row.id));
      return null;
    }
    const leaseUntil = new Date(now.getTime() + LEASE_MS);
    const attempts = row.attempts + 1;
    await tx
      .update(job)
      .set({ state: 'running', leaseOwner: owner, leaseUntil, attempts })
      .where(eq(job.id, row.id));
    return { ...row, state: 'running', leaseOwner: owner, leaseUntil, attempts };
  });
}

/** Renews the lease and reports progress; false when the job was cancelled or taken away. */
export async function heartbeat(
  db: Db,
  held: { id: string; owner: string; now: Date; done: number; total: number; stage: string },
): Promise<boolean> {
  const leaseUntil = new Date(held.now.getTime() + LEASE_MS);
  const [result] = await db
    .update(job)
    .set({ leaseUntil, done: held.done, total: held.total, stage: held.stage.slice(0, 80) })
    .where(and(eq(job.id, held.id), eq(job.leaseOwner, held.owner), eq(job.state, 'running')));
  return result.affectedRows === 1;
}

/** Ends a job inside the transaction that stores its result; false when it is no longer ours. */
export async function finish(
  tx: Conn,
  held: { id: string; owner: string; now: Date; resultId?: string | null },
): Promise<boolean> {
  const [result] = await tx
    .update(job)
    .set({
      state: 'done',
      activeKey: null,
      endedAt: held.now,
      resultId: held.resultId ?? null,
      done: sql`${job.total}`,
    })
    .where(and(eq(job.id, held.id), eq(job.leaseOwner, held.owner), eq(job.state, 'running')));
  return result.affectedRows === 1;
}

export async function fail(
  db: Db,
  held: { id: string; owner: string; now: Date; error: string },
): Promise<void> {
  await db
    .update(job)
    .set({ state: 'failed', activeKey: null, endedAt: held.now, error: held.error })
    .where(and(eq(job.id, held.id), eq(job.leaseOwner, held.owner), eq(job.state, 'running')));
}

/** Cancels a waiting or running job of this lab; the worker ends its thread at the next beat. */
export async function cancel(
  conn: Conn,
  wanted: { labId: string; jobId: string; now: Date },
): Promise<boolean> {
  const [result] = await conn
    .update(job)
    .set({ state: 'cancelled', activeKey: null, endedAt: wanted.now })
    .where(
      and(
        eq(job.id, wanted.jobId),
        eq(job.labId, wanted.labId),
        inArray(job.state, ['queued', 'running']),
      ),
    );
  return result.affectedRows === 1;
}
