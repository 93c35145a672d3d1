import { and, asc, desc, eq, inArray, sql } from 'drizzle-orm';
import type { Verdict } from '@/lib/contracts';
import type { Conn } from '../client';
import { preparation, reading, run, runVerdict, upload, user } from '../schema';

/** A study's runs in dose order, with preparation and how many readings each has. */
export async function runsWithReadings(conn: Conn, of: { labId: string; studyId: string }) {
  const rows = await conn
    .select({ run, preparation: preparation.code })
    .from(run)
    .innerJoin(preparation, eq(preparation.id, run.preparationId))
    .where(and(eq(run.labId, of.labId), eq(run.studyId, of.studyId)))
    .orderBy(asc(run.control), asc(run.number));
  const ids = rows.map((r) => r.run.id);
  const counts = ids.length
    ? await conn
        .select({ runId: reading.runId, count: sql<string>`count(*)` })
        .from(reading)
        .where(and(eq(reading.labId, of.labId), inArray(reading.runId, ids)))
        .groupBy(reading.runId)
    : [];
  const countOf = new Map(counts.map((c) => [c.runId, Number(c.count)]));
  return rows.map((r) => ({
    ...r.run,
    preparation: r.preparation,
    readings: countOf.get(r.run.id) ?? 0,
  }));
}

/** One run's readings of one readout, in order of time. */
export async function readingsOfRun(
  conn: Conn,
  of: { labId: string; runId: string; readout?: string },
) {
  return conn
    .select()
    .from(reading)
    .where(
      and(
        eq(reading.labId, of.labId),
        eq(reading.runId, of.runId),
        of.readout ? eq(reading.readout, of.readout) : undefined,
      ),
    )
    .orderBy(asc(reading.minutes));
}

export type RunVerdict = typeof runVerdict.$inferSelect;

/** All verdicts of some runs, the newest first. */
export async function verdictsOfRuns(
  conn: Conn,
  of: { labId: string; runIds: string[] },
): Promise<RunVerdict[]> {
  if (of.runIds.length === 0) return [];
  return conn
    .select()
    .from(runVerdict)
    .where(and(eq(runVerdict.labId, of.labId), inArray(runVerdict.runId, of.runIds)))
    .orderBy(desc(runVerdict.createdAt), desc(runVerdict.id));
}

/** What counts for a run: an overrule or a published call before the computed one. */
export function standingVerdict(rows: RunVerdict[]): {
  verdict: Verdict | null;
  standing: RunVerdict | null;
  computed: RunVerdict | null;
} {
  const computed = rows.find((r) => r.kind === 'computed') ?? null;
  const said = rows.find((r) => r.kind !== 'computed') ?? null;
  const standing = said ?? computed;
  return { verdict: standing?.verdict ?? null, standing, computed };
}

/** Files uploaded to a study, the newest first, without their bytes. */
export async function uploadsOfStudy(conn: Conn, of: { labId: string; studyId: string }) {
  return conn
    .select({ upload, by: user.name, runNumber: run.number })
    .from(upload)
    .innerJoin(user, eq(user.id, upload.byId))
    .innerJoin(run, eq(run.id, upload.runId))
    .where(and(eq(upload.labId, of.labId), eq(upload.studyId, of.studyId)))
    .orderBy(desc(upload.createdAt));
}
