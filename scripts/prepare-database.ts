import { resolve } from 'node:path';
import { inArray } from 'drizzle-orm';
import { openDatabase } from '@/db/client';
import { user } from '@/db/schema';
import { demoSignIns } from '@/db/seed';
import { EnvError, env } from '@/lib/server/env';
import { seedDemo } from './demo';
import { migrateDatabase } from './setup/migrate';

/**
 * Brings the database to this version and, when it has no lab yet, fills in the demo lab.
 * Writes one line of JSON: whether it was filled now, and the demo sign-ins that exist.
 */
async function main(): Promise<void> {
  const settings = env();
  const config = {
    host: settings.DATABASE_HOST,
    port: settings.DATABASE_PORT,
    user: settings.DATABASE_USER,
    password: settings.DATABASE_PASSWORD,
    database: settings.DATABASE_NAME,
  };
  await migrateDatabase(config, resolve('db/migrations'));
  const { db, close } = openDatabase({ ...config, connections: 4 });
  try {
    const { seeded } = await seedDemo(db, new Date());
    const emails = demoSignIns.map((one) => one.email);
    const found = await db
      .select({ email: user.email })
      .from(user)
      .where(inArray(user.email, emails));
    const existing = new Set(found.map((row) => row.email));
    const signIns = demoSignIns.filter((one) => existing.has(one.email));
    console.log(JSON.stringify({ seeded, signIns }));
  } finally {
    await close();
  }
}

/** What failed and why: a failed statement carries the database's own reason as its cause. */
function account(error: unknown): string {
  if (error instanceof EnvError) return error.message;
  if (!(error instanceof Error)) return String(error);
  const reason = error.cause instanceof Error ? `\nbecause: ${error.cause.message}` : '';
  return `${error.stack ?? error.message}${reason}`;
}

main().catch((error: unknown) => {
  console.error(account(error));
  process.exitCode = 1;
});
