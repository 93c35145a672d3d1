import { and, desc, eq } from 'drizzle-orm';
import type { Conn } from '../client';
import { type JobKind, job } from '../schema';

/** The newest job of one kind of a study, in whatever state it is. */
export async function newestJob(conn: Conn, of: { labId: string; studyId: string; kind: JobKind }) {
  const [row] = await conn
    .select({ id: job.id, state: job.state, error: job.error, createdAt: job.createdAt })
    .from(job)
    .where(and(eq(job.labId, of.labId), eq(job.studyId, of.studyId), eq(job.kind, of.kind)))
    .orderBy(desc(job.createdAt), desc(job.id))
    .limit(1);
  return row ?? null;
}
