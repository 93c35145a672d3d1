import { sql } from 'drizzle-orm';
import { afterAll, expect, test } from 'vitest';
import { openDatabase } from '@/db/client';
import { env } from '@/lib/server/env';

const settings = env();
const { db, close } = openDatabase({
  host: settings.DATABASE_HOST,
  port: settings.DATABASE_PORT,
  user: settings.DATABASE_USER,
  password: settings.DATABASE_PASSWORD,
  database: settings.DATABASE_NAME,
});
afterAll(close);

async function one(query: ReturnType<typeof sql>): Promise<unknown> {
  const [rows] = await db.execute(query);
  const row: unknown = Array.isArray(rows) ? rows[0] : undefined;
  return Object.values(row as Record<string, unknown>)[0];
}

test('database tests have a migrated database of their own, in UTC and full Unicode', async () => {
  expect(await one(sql`SELECT DATABASE()`)).toMatch(/^swaypoint_test_\d+$/);
  expect(await one(sql`SELECT @@time_zone`)).toBe('+00:00');
  expect(await one(sql`SELECT @@character_set_database`)).toBe('utf8mb4');
  const tables = sql`SELECT COUNT(*) FROM information_schema.tables WHERE table_schema = DATABASE()`;
  expect(Number(await one(tables))).toBeGreaterThan(10);
});

test('a value that does not fit its column is refused, not cut', async () => {
  await db.execute(sql`CREATE TEMPORARY TABLE strict (word VARCHAR(3) NOT NULL)`);
  await expect(db.execute(sql`INSERT INTO strict VALUES ('four')`)).rejects.toThrow();
});
