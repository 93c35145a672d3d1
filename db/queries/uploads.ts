import { and, desc, eq } from 'drizzle-orm';
import type { Conn } from '../client';
import { run, study, upload, user } from '../schema';

/** One upload of this lab's study; null for another lab's or an unknown one. */
export async function uploadById(
  conn: Conn,
  of: { labId: string; studyId: string; uploadId: string },
) {
  const [row] = await conn
    .select()
    .from(upload)
    .where(
      and(eq(upload.id, of.uploadId), eq(upload.studyId, of.studyId), eq(upload.labId, of.labId)),
    );
  return row ?? null;
}

/** A study's files, the newest first, without the list of their problems. */
export async function uploadList(conn: Conn, of: { labId: string; studyId: string }) {
  return conn
    .select({
      id: upload.id,
      fileName: upload.fileName,
      bytes: upload.bytes,
      sha256: upload.sha256,
      kept: upload.rowsKept,
      refused: upload.rowsRefused,
      createdAt: upload.createdAt,
      by: user.name,
      runId: upload.runId,
      runNumber: run.number,
    })
    .from(upload)
    .innerJoin(user, eq(user.id, upload.byId))
    .innerJoin(run, eq(run.id, upload.runId))
    .where(and(eq(upload.labId, of.labId), eq(upload.studyId, of.studyId)))
    .orderBy(desc(upload.createdAt));
}

/** How the last file of this study, else of its rig, was declared to be read. */
export async function lastMapping(
  conn: Conn,
  of: { labId: string; studyId: string; rigId: string | null },
) {
  const newest = (where: ReturnType<typeof and>) =>
    conn
      .select({ mapping: upload.mapping })
      .from(upload)
      .innerJoin(study, eq(study.id, upload.studyId))
      .where(and(eq(upload.labId, of.labId), where))
      .orderBy(desc(upload.createdAt))
      .limit(1);
  const [own] = await newest(eq(upload.studyId, of.studyId));
  if (own) return own.mapping;
  if (!of.rigId) return null;
  const [same] = await newest(eq(study.rigId, of.rigId));
  return same?.mapping ?? null;
}
