import { and, desc, eq } from 'drizzle-orm';
import type { Conn } from '../client';
import { systemVersion, user } from '../schema';

export type SystemRow = typeof systemVersion.$inferSelect & { createdByName: string };

type OfStudy = { labId: string; studyId: string };

const ofStudy = ({ labId, studyId }: OfStudy) =>
  and(eq(systemVersion.labId, labId), eq(systemVersion.studyId, studyId));

const select = (conn: Conn) =>
  conn
    .select({ version: systemVersion, createdByName: user.name })
    .from(systemVersion)
    .innerJoin(user, eq(user.id, systemVersion.createdBy));

/** The newest version of a study's system; null when there is none. */
export async function latestSystem(conn: Conn, of: OfStudy): Promise<SystemRow | null> {
  const [row] = await select(conn).where(ofStudy(of)).orderBy(desc(systemVersion.number)).limit(1);
  return row ? { ...row.version, createdByName: row.createdByName } : null;
}

/** One version by its number; null when the study has no such version. */
export async function systemByNumber(
  conn: Conn,
  of: OfStudy & { number: number },
): Promise<SystemRow | null> {
  const [row] = await select(conn).where(and(ofStudy(of), eq(systemVersion.number, of.number)));
  return row ? { ...row.version, createdByName: row.createdByName } : null;
}

/** One version by its id, whichever study of the lab it belongs to. */
export async function systemById(
  conn: Conn,
  { labId, id }: { labId: string; id: string },
): Promise<SystemRow | null> {
  const [row] = await select(conn).where(
    and(eq(systemVersion.labId, labId), eq(systemVersion.id, id)),
  );
  return row ? { ...row.version, createdByName: row.createdByName } : null;
}

/** The versions of a study's system, the newest first, without their models. */
export async function systemVersions(conn: Conn, of: OfStudy) {
  return conn
    .select({
      id: systemVersion.id,
      number: systemVersion.number,
      reason: systemVersion.reason,
      createdAt: systemVersion.createdAt,
      createdByName: user.name,
    })
    .from(systemVersion)
    .innerJoin(user, eq(user.id, systemVersion.createdBy))
    .where(ofStudy(of))
    .orderBy(desc(systemVersion.number));
}

export async function insertSystemVersion(
  tx: Conn,
  row: typeof systemVersion.$inferInsert,
): Promise<void> {
  await tx.insert(systemVersion).values(row);
}
