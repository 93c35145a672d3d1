import { and, eq } from 'drizzle-orm';
import { job } from '@/db/schema';
import { notFound } from '@/lib/server/errors';
import { labRoute } from '@/lib/server/route';

/** How far a calculation of this lab is. */
export const GET = labRoute<{ jobId: string }>('see', async ({ db, member, params }) => {
  const [row] = await db
    .select({
      id: job.id,
      kind: job.kind,
      state: job.state,
      done: job.done,
      total: job.total,
      stage: job.stage,
      error: job.error,
      resultId: job.resultId,
    })
    .from(job)
    .where(and(eq(job.id, params.jobId), eq(job.labId, member.labId)))
    .limit(1);
  if (!row) throw notFound('calculation');
  return row;
});
