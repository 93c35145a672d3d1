import { eq, sql } from 'drizzle-orm';
import type { Conn } from '@/db/client';
import { rateCount } from '@/db/schema';

/** Counts an attempt in a fixed window; false once there were more than `most`. */
export async function limitAttempts(
  db: Conn,
  key: string,
  most: number,
  windowMs: number,
  now = Date.now(),
): Promise<boolean> {
  const windowStart = Math.floor(now / windowMs) * windowMs;
  const short = key.slice(0, 160);
  // In words of SQL: assignments count from left to right, and the count needs the window of before.
  await db.execute(sql`
    insert into ${rateCount} (rate_key, window_start, count) values (${short}, ${windowStart}, 1)
    on duplicate key update
      count = if(window_start = ${windowStart}, count + 1, 1),
      window_start = ${windowStart}`);
  const [row] = await db.select().from(rateCount).where(eq(rateCount.key, short)).limit(1);
  return (row?.count ?? 1) <= most;
}

/** Forgets the attempts on a key: what succeeded was no attack. */
export async function forgetAttempts(db: Conn, key: string): Promise<void> {
  await db.delete(rateCount).where(eq(rateCount.key, key.slice(0, 160)));
}
