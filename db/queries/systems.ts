import { and, desc, eq, inArray, max } from 'drizzle-orm';
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

/** The newest system of a study in outline. */
export type SystemOutline = {
  studyId: string;
  number: number;
  name: string;
  controlSymbol: string;
  controlUnit: string | null;
  from: number;
  to: number;
};

/** The newest system of each study, in outline, by study id. */
export async function newestSystems(
  conn: Conn,
  { labId, studyIds }: { labId: string; studyIds: string[] },
): Promise<Map<string, SystemOutline>> {
  const outlines = new Map<string, SystemOutline>();
  if (studyIds.length === 0) return outlines;
  const newest = conn
    .select({ studyId: systemVersion.studyId, number: max(systemVersion.number).as('newest') })
    .from(systemVersion)
    .where(and(eq(systemVersion.labId, labId), inArray(systemVersion.studyId, studyIds)))
    .groupBy(systemVersion.studyId)
    .as('newest_system');
  const rows = await conn
    .select({ version: systemVersion })
    .from(systemVersion)
    .innerJoin(
      newest,
      and(eq(newest.studyId, systemVersion.studyId), eq(newest.number, systemVersion.number)),
    )
    .where(eq(systemVersion.labId, labId));
  for (const { version } of rows) {
    const { studyId, number, model, control } = version;
    const parameter = model.parameters.find((p) => p.symbol === control.symbol);
    outlines.set(studyId, {
      studyId,
      number,
      name: model.name,
      controlSymbol: control.symbol,
      controlUnit: parameter?.unit ?? null,
      from: control.from,
      to: control.to,
    });
  }
  return outlines;
}
