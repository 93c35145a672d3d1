import { and, count, desc, eq, inArray, max, sql } from 'drizzle-orm';
import type { Conn } from '../client';
import {
  job,
  onsetEstimate,
  predictedOnset,
  prediction,
  reading,
  rig,
  run,
  runVerdict,
  seriesVersion,
  session,
  study,
  systemVersion,
  user,
} from '../schema';
import { type Station, type StudyCounts, stationsOf } from './study-stations';

export type Study = typeof study.$inferSelect;
export type StudyRow = Study & { rigName: string | null; createdByName: string };

const inLab = (labId: string, studyId: string) =>
  and(eq(study.labId, labId), eq(study.id, studyId));

/** One study of this lab with its rig's and author's names; null for another lab's or unknown id. */
export async function studyById(
  conn: Conn,
  { labId, studyId }: { labId: string; studyId: string },
): Promise<StudyRow | null> {
  const [row] = await conn
    .select({ study, rigName: rig.name, createdByName: user.name })
    .from(study)
    .innerJoin(user, eq(user.id, study.createdBy))
    .leftJoin(rig, and(eq(rig.id, study.rigId), eq(rig.labId, study.labId)))
    .where(inLab(labId, studyId));
  return row ? { ...row.study, rigName: row.rigName, createdByName: row.createdByName } : null;
}

/** All studies of the lab, the newest first. */
export async function studiesOfLab(conn: Conn, { labId }: { labId: string }): Promise<StudyRow[]> {
  const rows = await conn
    .select({ study, rigName: rig.name, createdByName: user.name })
    .from(study)
    .innerJoin(user, eq(user.id, study.createdBy))
    .leftJoin(rig, and(eq(rig.id, study.rigId), eq(rig.labId, study.labId)))
    .where(eq(study.labId, labId))
    .orderBy(desc(study.createdAt), desc(study.id));
  return rows.map((r) => ({ ...r.study, rigName: r.rigName, createdByName: r.createdByName }));
}

/** Holds the study's row until the transaction ends, so that numbers of versions do not collide. */
export async function lockStudy(
  tx: Conn,
  { labId, studyId }: { labId: string; studyId: string },
): Promise<Study | null> {
  const [row] = await tx.select().from(study).where(inLab(labId, studyId)).for('update');
  return row ?? null;
}

/** Rigs of the lab that can still be used, by name. */
export async function usableRigs(conn: Conn, { labId }: { labId: string }) {
  return conn
    .select({ id: rig.id, name: rig.name, place: rig.place })
    .from(rig)
    .where(and(eq(rig.labId, labId), eq(rig.retired, false)))
    .orderBy(rig.name);
}

/** The stations of one study's signal line; null for another lab's or unknown id. */
export async function studyProgress(
  conn: Conn,
  { labId, studyId }: { labId: string; studyId: string },
): Promise<Station[] | null> {
  const known = await conn.select({ id: study.id }).from(study).where(inLab(labId, studyId));
  if (known.length === 0) return null;
  return (await progressOfStudies(conn, { labId, studyIds: [studyId] })).get(studyId) ?? null;
}

/** The signal lines of many studies in a fixed number of queries. */
export async function progressOfStudies(
  conn: Conn,
  { labId, studyIds }: { labId: string; studyIds: string[] },
): Promise<Map<string, Station[]>> {
  const counts = await countsOfStudies(conn, { labId, studyIds });
  return new Map([...counts].map(([id, c]) => [id, stationsOf(c)]));
}

type Wanted = { labId: string; studyIds: string[] };

async function countsOfStudies(conn: Conn, wanted: Wanted): Promise<Map<string, StudyCounts>> {
  const counts = new Map<string, StudyCounts>(
    wanted.studyIds.map((id) => [
      id,
      {
        systemNumber: null,
        prediction: null,
        predicting: null,
        series: null,
        approvedSeries: null,
        sessions: {},
        runs: {},
        runsRead: 0,
        undecided: 0,
        observedOnsets: null,
      },
    ]),
  );
  if (wanted.studyIds.length === 0) return counts;
  await countSystems(conn, wanted, counts);
  await countPredictions(conn, wanted, counts);
  await countSeries(conn, wanted, counts);
  await countWork(conn, wanted, counts);
  await countEvidence(conn, wanted, counts);
  return counts;
}

type Counts = Map<string, StudyCounts>;

async function countSystems(conn: Conn, { labId, studyIds }: Wanted, counts: Counts) {
  const rows = await conn
    .select({ studyId: systemVersion.studyId, number: max(systemVersion.number) })
    .from(systemVersion)
    .where(and(eq(systemVersion.labId, labId), inArray(systemVersion.studyId, studyIds)))
    .groupBy(systemVersion.studyId);
  for (const row of rows) {
    const c = counts.get(row.studyId);
    if (c) c.systemNumber = row.number;
  }
}

async function countPredictions(conn: Conn, { labId, studyIds }: Wanted, counts: Counts) {
  const rows = await conn
    .select({
      studyId: prediction.studyId,
      systemNumber: systemVersion.number,
      onsets: count(predictedOnset.id),
    })
    .from(prediction)
    .innerJoin(systemVersion, eq(systemVersion.id, prediction.systemVersionId))
    .leftJoin(predictedOnset, eq(predictedOnset.predictionId, prediction.id))
    .where(and(eq(prediction.labId, labId), inArray(prediction.studyId, studyIds)))
    .groupBy(prediction.id, prediction.studyId, systemVersion.number, prediction.createdAt)
    .orderBy(prediction.createdAt, prediction.id);
  for (const { studyId, ...row } of rows) {
    const c = counts.get(studyId);
    if (c) c.prediction = row;
  }
  const jobs = await conn
    .select({ studyId: job.studyId, state: job.state })
    .from(job)
    .where(and(eq(job.labId, labId), inArray(job.studyId, studyIds), eq(job.kind, 'predict')))
    .orderBy(job.createdAt, job.id);
  for (const { studyId, state } of jobs) {
    const c = counts.get(studyId);
    if (c) c.predicting = state === 'done' || state === 'cancelled' ? null : state;
  }
}

async function countSeries(conn: Conn, { labId, studyIds }: Wanted, counts: Counts) {
  const rows = await conn
    .select({
      studyId: seriesVersion.studyId,
      number: seriesVersion.number,
      state: seriesVersion.state,
    })
    .from(seriesVersion)
    .where(and(eq(seriesVersion.labId, labId), inArray(seriesVersion.studyId, studyIds)))
    .orderBy(seriesVersion.number);
  for (const { studyId, ...row } of rows) {
    const c = counts.get(studyId);
    if (!c) continue;
    c.series = row;
    if (row.state === 'approved') c.approvedSeries = row.number;
  }
}

async function countWork(conn: Conn, { labId, studyIds }: Wanted, counts: Counts) {
  const sessions = await conn
    .select({ studyId: session.studyId, state: session.state, n: count() })
    .from(session)
    .where(and(eq(session.labId, labId), inArray(session.studyId, studyIds)))
    .groupBy(session.studyId, session.state);
  for (const row of sessions) {
    const c = counts.get(row.studyId);
    if (c) c.sessions[row.state] = row.n;
  }
  const runs = await conn
    .select({ studyId: run.studyId, state: run.state, n: count() })
    .from(run)
    .where(and(eq(run.labId, labId), inArray(run.studyId, studyIds)))
    .groupBy(run.studyId, run.state);
  for (const row of runs) {
    const c = counts.get(row.studyId);
    if (c) c.runs[row.state] = row.n;
  }
}

async function countEvidence(conn: Conn, { labId, studyIds }: Wanted, counts: Counts) {
  const read = await conn
    .select({ studyId: run.studyId, n: count() })
    .from(run)
    .where(
      and(
        eq(run.labId, labId),
        inArray(run.studyId, studyIds),
        sql`exists (select 1 from ${reading} where ${reading.runId} = ${run.id})`,
      ),
    )
    .groupBy(run.studyId);
  for (const row of read) {
    const c = counts.get(row.studyId);
    if (c) c.runsRead = row.n;
  }
  for (const v of await newestVerdicts(conn, { labId, studyIds })) {
    const c = counts.get(v.studyId);
    if (c && v.verdict === 'undecided') c.undecided += 1;
  }
  const estimates = await conn
    .select({
      studyId: onsetEstimate.studyId,
      onsets:
        sql<number>`COALESCE(JSON_LENGTH(JSON_EXTRACT(${onsetEstimate.answers}, '$[*].onsets[*]')), 0)`.mapWith(
          Number,
        ),
    })
    .from(onsetEstimate)
    .where(and(eq(onsetEstimate.labId, labId), inArray(onsetEstimate.studyId, studyIds)))
    .orderBy(onsetEstimate.createdAt, onsetEstimate.id);
  for (const row of estimates) {
    const c = counts.get(row.studyId);
    if (c) c.observedOnsets = row.onsets;
  }
}

/** The verdict that counts of every judged run: what somebody said of it, else the newest computed. */
export async function newestVerdicts(conn: Conn, { labId, studyIds }: Wanted) {
  if (studyIds.length === 0) return [];
  const rows = await conn
    .select({
      studyId: run.studyId,
      runId: run.id,
      levelId: run.levelId,
      control: run.control,
      dose: run.dose,
      verdict: runVerdict.verdict,
    })
    .from(runVerdict)
    .innerJoin(run, and(eq(run.id, runVerdict.runId), eq(run.labId, runVerdict.labId)))
    .where(and(eq(runVerdict.labId, labId), inArray(run.studyId, studyIds)))
    .orderBy(sql`${runVerdict.kind} <> 'computed'`, runVerdict.createdAt, runVerdict.id);
  return [...new Map(rows.map((row) => [row.runId, row])).values()];
}

export async function insertStudy(tx: Conn, row: typeof study.$inferInsert): Promise<void> {
  await tx.insert(study).values(row);
}

export async function updateStudy(
  tx: Conn,
  wanted: { labId: string; studyId: string; set: Partial<typeof study.$inferInsert> },
): Promise<void> {
  await tx.update(study).set(wanted.set).where(inLab(wanted.labId, wanted.studyId));
}
