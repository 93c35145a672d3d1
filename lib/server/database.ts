import { type Db, openDatabase } from '@/db/client';
import { env } from './env';

const held = globalThis as typeof globalThis & { swaypointDb?: ReturnType<typeof openDatabase> };

/** The process's one pool; kept across module reloads in development. */
export function database(): Db {
  if (!held.swaypointDb) {
    const e = env();
    held.swaypointDb = openDatabase({
      host: e.DATABASE_HOST,
      port: e.DATABASE_PORT,
      user: e.DATABASE_USER,
      password: e.DATABASE_PASSWORD,
      database: e.DATABASE_NAME,
    });
  }
  return held.swaypointDb.db;
}

export async function closeDatabase(): Promise<void> {
  await held.swaypointDb?.close();
  held.swaypointDb = undefined;
}
