import { sql } from 'drizzle-orm';
import { workerBeat } from '@/db/schema';
import { database } from '@/lib/server/database';

const SILENT_AFTER_MS = 20_000;

/** State of database and worker; 200 while pages can be served, 503 without a database. */
export async function GET(): Promise<Response> {
  const headers = { 'cache-control': 'no-store' };
  try {
    await database().execute(sql`select 1`);
    const beats = await database().select().from(workerBeat);
    const newest = Math.max(0, ...beats.map((b) => b.at.getTime()));
    const worker = Date.now() - newest < SILENT_AFTER_MS ? 'running' : 'silent';
    return Response.json({ status: 'ok', database: 'reachable', worker }, { headers });
  } catch {
    return Response.json(
      { status: 'failed', database: 'unreachable', worker: 'unknown' },
      { status: 503, headers },
    );
  }
}
