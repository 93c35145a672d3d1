import { and, asc, desc, eq } from 'drizzle-orm';
import type { Conn } from '../client';
import { onsetEstimate } from '../schema';

export type OnsetEstimate = typeof onsetEstimate.$inferSelect;

export async function latestEstimate(
  conn: Conn,
  of: { labId: string; studyId: string },
): Promise<OnsetEstimate | null> {
  const [row] = await conn
    .select()
    .from(onsetEstimate)
    .where(and(eq(onsetEstimate.labId, of.labId), eq(onsetEstimate.studyId, of.studyId)))
    .orderBy(desc(onsetEstimate.createdAt), desc(onsetEstimate.id))
    .limit(1);
  return row ?? null;
}

/** All estimates of a study, the oldest first: how the interval narrowed. */
export async function estimateHistory(conn: Conn, of: { labId: string; studyId: string }) {
  return conn
    .select({
      id: onsetEstimate.id,
      answers: onsetEstimate.answers,
      runsJudged: onsetEstimate.runsJudged,
      createdAt: onsetEstimate.createdAt,
    })
    .from(onsetEstimate)
    .where(and(eq(onsetEstimate.labId, of.labId), eq(onsetEstimate.studyId, of.studyId)))
    .orderBy(asc(onsetEstimate.createdAt));
}
