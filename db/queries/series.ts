import { and, asc, desc, eq, inArray } from 'drizzle-orm';
import type { Conn } from '../client';
import { level, seriesVersion, user } from '../schema';

export type SeriesVersion = typeof seriesVersion.$inferSelect;
export type Level = typeof level.$inferSelect;

/** All versions of a study's series, the newest first, with who wrote and decided them. */
export async function seriesVersions(conn: Conn, of: { labId: string; studyId: string }) {
  const rows = await conn
    .select({ version: seriesVersion, author: user.name })
    .from(seriesVersion)
    .innerJoin(user, eq(user.id, seriesVersion.createdBy))
    .where(and(eq(seriesVersion.labId, of.labId), eq(seriesVersion.studyId, of.studyId)))
    .orderBy(desc(seriesVersion.number));
  const deciders = rows.flatMap((r) => (r.version.decidedBy ? [r.version.decidedBy] : []));
  const names = deciders.length
    ? await conn
        .select({ id: user.id, name: user.name })
        .from(user)
        .where(inArray(user.id, deciders))
    : [];
  return rows.map((r) => ({
    ...r.version,
    author: r.author,
    decider: names.find((n) => n.id === r.version.decidedBy)?.name ?? null,
  }));
}

export async function seriesVersionById(
  conn: Conn,
  of: { labId: string; seriesVersionId: string; studyId?: string },
): Promise<SeriesVersion | null> {
  const [row] = await conn
    .select()
    .from(seriesVersion)
    .where(
      and(
        eq(seriesVersion.labId, of.labId),
        eq(seriesVersion.id, of.seriesVersionId),
        of.studyId ? eq(seriesVersion.studyId, of.studyId) : undefined,
      ),
    )
    .limit(1);
  return row ?? null;
}

export async function levelsOf(
  conn: Conn,
  of: { labId: string; seriesVersionId: string },
): Promise<Level[]> {
  return conn
    .select()
    .from(level)
    .where(and(eq(level.labId, of.labId), eq(level.seriesVersionId, of.seriesVersionId)))
    .orderBy(asc(level.position));
}

/** The version whose approval is in force, if there is one. */
export async function approvedVersion(
  conn: Conn,
  of: { labId: string; studyId: string },
): Promise<SeriesVersion | null> {
  const [row] = await conn
    .select()
    .from(seriesVersion)
    .where(
      and(
        eq(seriesVersion.labId, of.labId),
        eq(seriesVersion.studyId, of.studyId),
        eq(seriesVersion.state, 'approved'),
      ),
    )
    .orderBy(desc(seriesVersion.number))
    .limit(1);
  return row ?? null;
}
