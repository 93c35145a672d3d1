import { and, desc, eq, inArray, sql } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import type { Control, Cycle, PredictedOnset, SystemModel } from '@/lib/contracts';
import type { Conn } from '../client';
import { job, predictedOnset, prediction, systemVersion, user } from '../schema';

type OfStudy = { labId: string; studyId: string };

export type PredictionRow = typeof prediction.$inferSelect & {
  systemNumber: number;
  askedByName: string | null;
};

const ofStudy = ({ labId, studyId }: OfStudy) =>
  and(eq(prediction.labId, labId), eq(prediction.studyId, studyId));

/** The study's newest prediction with its whole answer; null when there is none. */
export async function latestPrediction(conn: Conn, of: OfStudy): Promise<PredictionRow | null> {
  const [row] = await conn
    .select({ prediction, systemNumber: systemVersion.number, askedByName: user.name })
    .from(prediction)
    .innerJoin(systemVersion, eq(systemVersion.id, prediction.systemVersionId))
    .leftJoin(job, eq(job.id, prediction.jobId))
    .leftJoin(user, eq(user.id, job.askedBy))
    .where(ofStudy(of))
    .orderBy(desc(prediction.createdAt), desc(prediction.id))
    .limit(1);
  if (!row) return null;
  return { ...row.prediction, systemNumber: row.systemNumber, askedByName: row.askedByName };
}

/** The newest job that works out a prediction of this study, in whatever state it is. */
export async function latestPredictJob(conn: Conn, { labId, studyId }: OfStudy) {
  const [row] = await conn
    .select({
      id: job.id,
      state: job.state,
      error: job.error,
      createdAt: job.createdAt,
      askedByName: user.name,
    })
    .from(job)
    .innerJoin(user, eq(user.id, job.askedBy))
    .where(and(eq(job.labId, labId), eq(job.studyId, studyId), eq(job.kind, 'predict')))
    .orderBy(desc(job.createdAt), desc(job.id))
    .limit(1);
  return row ?? null;
}

export async function insertPrediction(
  tx: Conn,
  row: typeof prediction.$inferInsert,
): Promise<void> {
  await tx.insert(prediction).values(row);
  const { onsets } = row.answer as { onsets: PredictedOnset[] };
  if (onsets.length === 0) return;
  await tx.insert(predictedOnset).values(
    onsets.map((onset, index) => ({
      id: uuid(),
      labId: row.labId,
      predictionId: row.id,
      ordinal: index + 1,
      value: onset.value,
      low: onset.spread?.low ?? null,
      high: onset.spread?.high ?? null,
      period: onset.period,
      oscillates: onset.oscillates,
      dose: onset.dose,
    })),
  );
}

/** What a small ribbon needs of a prediction, without its draws and branch. */
export type PredictionOutline = {
  predictionId: string;
  studyId: string;
  systemNumber: number;
  systemVersionId: string;
  model: SystemModel;
  control: Control;
  cycles: Cycle[];
  onsets: {
    value: number;
    low: number | null;
    high: number | null;
    period: number;
    oscillates: 'above' | 'below';
    dose: number | null;
    coexistence: PredictedOnset['coexistence'];
  }[];
};

const parsed = <T>(value: unknown): T =>
  (typeof value === 'string' ? JSON.parse(value) : value) as T;

/** The newest prediction of each study, in outline, by study id. */
export async function predictionOutlines(
  conn: Conn,
  { labId, studyIds }: { labId: string; studyIds: string[] },
): Promise<Map<string, PredictionOutline>> {
  const outlines = new Map<string, PredictionOutline>();
  if (studyIds.length === 0) return outlines;
  const ids = await conn
    .select({ id: prediction.id, studyId: prediction.studyId })
    .from(prediction)
    .where(and(eq(prediction.labId, labId), inArray(prediction.studyId, studyIds)))
    .orderBy(prediction.createdAt, prediction.id);
  const newest = [...new Map(ids.map((row) => [row.studyId, row.id])).values()];
  if (newest.length === 0) return outlines;
  const rows = await conn
    .select({
      predictionId: prediction.id,
      studyId: prediction.studyId,
      systemNumber: systemVersion.number,
      systemVersionId: systemVersion.id,
      control: systemVersion.control,
      model: systemVersion.model,
      cycles: sql`JSON_EXTRACT(${prediction.answer}, '$.cycles')`,
      coexistence: sql`JSON_EXTRACT(${prediction.answer}, '$.onsets[*].coexistence')`,
    })
    .from(prediction)
    .innerJoin(systemVersion, eq(systemVersion.id, prediction.systemVersionId))
    .where(and(eq(prediction.labId, labId), inArray(prediction.id, newest)));
  const onsets = await conn
    .select()
    .from(predictedOnset)
    .where(and(eq(predictedOnset.labId, labId), inArray(predictedOnset.predictionId, newest)))
    .orderBy(predictedOnset.ordinal);
  for (const { cycles, coexistence, ...row } of rows) {
    const windows = parsed<PredictedOnset['coexistence'][] | null>(coexistence) ?? [];
    const own = onsets.filter((o) => o.predictionId === row.predictionId);
    outlines.set(row.studyId, {
      ...row,
      cycles: parsed<Cycle[] | null>(cycles) ?? [],
      onsets: own.map((o, i) => ({ ...o, coexistence: windows[i] ?? null })),
    });
  }
  return outlines;
}
