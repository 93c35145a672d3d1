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
  await db
    .insert(rateCount)
    .values({ key: short, windowStart, count: 1 })
    .onDuplicateKeyUpdate({
      set: {
        count: sql`if(${rateCount.windowStart} = ${windowStart}, ${rateCount.count} + 1, 1)`,
        windowStart,
      },
    });
  const [row] = await db.select().from(rateCount).where(eq(rateCount.key, short)).limit(1);
  return (row?.count ?? 1) <= most;
}
