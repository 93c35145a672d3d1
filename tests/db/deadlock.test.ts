import { eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { afterAll, describe, expect, test } from 'vitest';
import { remark, run } from '@/db/schema';
import { isDeadlock, retryDeadlock } from '@/lib/server/retry-deadlock';
import { pressStop } from '@/lib/server/stops/press-stop';
import { acting, freshLab, openTestDatabase } from '../setup/fresh-lab';
import { calendarOf, laidOutStudy } from '../setup/fresh-study';

const { db, close } = openTestDatabase(6);
afterAll(close);

const deadlock = () =>
  Object.assign(new Error('query failed'), { cause: { code: 'ER_LOCK_DEADLOCK' } });

describe('work that the database undid in favour of another', () => {
  test('is done again, four times at most, and nothing else is', async () => {
    let tries = 0;
    const twice = async () => {
      tries += 1;
      if (tries < 3) throw deadlock();
      return 'done';
    };
    expect(await retryDeadlock(twice)).toBe('done');
    tries = 0;
    const always = async () => {
      tries += 1;
      throw deadlock();
    };
    await expect(retryDeadlock(always)).rejects.toThrow('query failed');
    expect(tries).toBe(4);
    tries = 0;
    const other = async () => {
      tries += 1;
      throw new Error('something else');
    };
    await expect(retryDeadlock(other)).rejects.toThrow('something else');
    expect(tries).toBe(1);
  });

  test('a stop holds though somebody writes to one of its runs in the order that forms a deadlock', async () => {
    const lab = await freshLab(db);
    const { studyId, rows } = await laidOutStudy(db, lab);
    const runId = rows[0]!.run.id;
    const errors: unknown[] = [];
    let stop: Promise<unknown> = Promise.resolve();
    const writer = db.transaction(async (tx) => {
      await tx.select().from(run).where(eq(run.id, runId)).for('update');
      stop = retryDeadlock(() => pressStop(acting(db, lab.people.observer), { studyId })).catch(
        (e) => errors.push(e),
      );
      await new Promise((resolve) => setTimeout(resolve, 300));
      const text = { kind: 'note' as const, text: 'foam', byId: lab.people.head.userId };
      await tx.insert(remark).values({ id: uuid(), labId: lab.labId, studyId, runId, ...text });
    });
    // Whoever of the two is undone: the writer may be told, the stop may not.
    const outcome = await writer.then(
      () => 'written',
      (e: unknown) => (isDeadlock(e) ? 'undone' : 'failed'),
    );
    await stop;
    expect(outcome).not.toBe('failed');
    expect(errors).toEqual([]);
    const after = await calendarOf(db, studyId);
    expect(new Set(after.map((r) => r.run.state))).toEqual(new Set(['suspended']));
  });
});
