import { eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { job } from '@/db/schema';
import { cancel, claim, enqueue, fail, finish, heartbeat, LEASE_MS } from '@/lib/server/jobs/queue';
import { type FreshLab, freshLab, MONDAY, openTestDatabase, plus } from '../setup/fresh-lab';

const { db, close } = openTestDatabase();
afterAll(close);
let lab: FreshLab;
let other: FreshLab;
beforeAll(async () => {
  lab = await freshLab(db);
  other = await freshLab(db);
});
// The queue is one for all labs of a database.
beforeEach(async () => {
  await db.delete(job);
});

const question = (input: Record<string, unknown> = { a: 1, b: [2, 3] }, of = lab) => ({
  labId: of.labId,
  studyId: '01a00000-0000-7000-8000-000000000001',
  askedBy: of.people.investigator.userId,
  kind: 'predict' as const,
  input,
});
const rowOf = async (id: string) => (await db.select().from(job).where(eq(job.id, id)))[0]!;
const beat = (id: string, owner: string, now: Date) =>
  heartbeat(db, { id, owner, now, done: 1, total: 4, stage: 'draws' });

describe('the same question', () => {
  test('is one calculation while it waits or runs, whatever the order of its keys', async () => {
    const first = await enqueue(db, question({ a: 1, b: [2, 3] }));
    const again = await enqueue(db, question({ b: [2, 3], a: 1 }));
    expect(again).toEqual({ jobId: first.jobId, joined: true });
    await claim(db, 'w', MONDAY);
    expect((await enqueue(db, question())).jobId).toBe(first.jobId);
    expect(await db.$count(job)).toBe(1);
  });

  test('of another lab, of another study or with another number is another one', async () => {
    const ids = [
      await enqueue(db, question()),
      await enqueue(db, question({ a: 1, b: [3, 2] })),
      await enqueue(db, question({ a: 1, b: [2, 3] }, other)),
      await enqueue(db, { ...question(), studyId: uuid() }),
      await enqueue(db, { ...question(), kind: 'design' }),
    ].map((j) => j.jobId);
    expect(new Set(ids).size).toBe(5);
  });

  test('may be asked again once it has ended', async () => {
    const first = await enqueue(db, question());
    await claim(db, 'w', MONDAY);
    await finish(db, { id: first.jobId, owner: 'w', now: MONDAY });
    const again = await enqueue(db, question());
    expect(again.joined).toBe(false);
    expect(again.jobId).not.toBe(first.jobId);
  });

  test('pressed by ten people at once is one calculation with one id for all', async () => {
    const asked = await Promise.all(Array.from({ length: 10 }, () => enqueue(db, question())));
    expect(new Set(asked.map((a) => a.jobId)).size).toBe(1);
    expect(asked.filter((a) => !a.joined)).toHaveLength(1);
    expect(await db.$count(job)).toBe(1);
  });

  test('is found by a transaction that began to read before it was asked', async () => {
    await db.transaction(async (tx) => {
      await tx.select().from(job);
      const first = await enqueue(db, question());
      const again = await enqueue(tx, question());
      expect(again).toEqual({ jobId: first.jobId, joined: true });
    });
  });
});

describe('a claim', () => {
  test('takes the oldest first, and each calculation once', async () => {
    const a = await enqueue(db, question({ n: 1 }));
    await db
      .update(job)
      .set({ createdAt: plus(MONDAY, -9) })
      .where(eq(job.id, a.jobId));
    const b = await enqueue(db, question({ n: 2 }));
    await db
      .update(job)
      .set({ createdAt: plus(MONDAY, -5) })
      .where(eq(job.id, b.jobId));
    expect((await claim(db, 'w', MONDAY))?.id).toBe(a.jobId);
    expect((await claim(db, 'w', MONDAY))?.id).toBe(b.jobId);
    expect(await claim(db, 'w', MONDAY)).toBeNull();
  });

  test('by two workers at once never takes the same', async () => {
    for (let n = 0; n < 6; n += 1) await enqueue(db, question({ n }));
    const taken = await Promise.all(
      Array.from({ length: 6 }, (_, i) => claim(db, `w${i}`, MONDAY)),
    );
    const ids = taken.flatMap((t) => (t ? [t.id] : []));
    expect(new Set(ids).size).toBe(ids.length);
    expect(ids.length).toBeGreaterThan(0);
  });

  test('holds for the lease; a worker that falls silent loses it to another', async () => {
    const { jobId } = await enqueue(db, question());
    await claim(db, 'first', MONDAY);
    expect(await claim(db, 'second', plus(MONDAY, LEASE_MS))).toBeNull();
    expect((await claim(db, 'second', plus(MONDAY, LEASE_MS + 1)))?.id).toBe(jobId);
    expect(await beat(jobId, 'first', plus(MONDAY, LEASE_MS + 2))).toBe(false);
    const late = { id: jobId, owner: 'first', now: MONDAY, resultId: uuid() };
    expect(await finish(db, late)).toBe(false);
    expect(await rowOf(jobId)).toMatchObject({ state: 'running', leaseOwner: 'second' });
  });

  test('is kept by a beat, which tells how far it is', async () => {
    const { jobId } = await enqueue(db, question());
    await claim(db, 'w', MONDAY);
    expect(await beat(jobId, 'w', plus(MONDAY, 20_000))).toBe(true);
    expect(await claim(db, 'second', plus(MONDAY, LEASE_MS + 1))).toBeNull();
    expect(await rowOf(jobId)).toMatchObject({ done: 1, total: 4, stage: 'draws' });
  });

  test('is tried three times, then the calculation fails in words and may be asked again', async () => {
    const { jobId } = await enqueue(db, question());
    let now = MONDAY;
    for (let i = 1; i <= 3; i += 1) {
      expect((await claim(db, `w${i}`, now))?.attempts).toBe(i);
      now = plus(now, LEASE_MS + 1);
    }
    expect(await claim(db, 'w4', now)).toBeNull();
    const row = await rowOf(jobId);
    expect(row).toMatchObject({ state: 'failed', activeKey: null });
    expect(row.error).toMatch(/interrupted 3 times/);
    expect((await enqueue(db, question())).joined).toBe(false);
  });
});

describe('a cancelled calculation', () => {
  test('stops at its next beat and stores nothing', async () => {
    const { jobId } = await enqueue(db, question());
    await claim(db, 'w', MONDAY);
    expect(await cancel(db, { labId: lab.labId, jobId, now: MONDAY })).toBe(true);
    expect(await beat(jobId, 'w', MONDAY)).toBe(false);
    expect(await finish(db, { id: jobId, owner: 'w', now: MONDAY })).toBe(false);
    await fail(db, { id: jobId, owner: 'w', now: MONDAY, error: 'late' });
    expect(await rowOf(jobId)).toMatchObject({ state: 'cancelled', error: null });
  });

  test('that waited is never begun', async () => {
    const { jobId } = await enqueue(db, question());
    await cancel(db, { labId: lab.labId, jobId, now: MONDAY });
    expect(await claim(db, 'w', MONDAY)).toBeNull();
    expect(await cancel(db, { labId: lab.labId, jobId, now: MONDAY })).toBe(false);
  });

  test('is not another lab’s to cancel', async () => {
    const { jobId } = await enqueue(db, question());
    expect(await cancel(db, { labId: other.labId, jobId, now: MONDAY })).toBe(false);
    expect(await rowOf(jobId)).toMatchObject({ state: 'queued' });
  });
});
