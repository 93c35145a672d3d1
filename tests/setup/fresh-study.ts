import { asc, eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import type { Db } from '@/db/client';
import { seriesVersions } from '@/db/queries/series';
import { insertSystemVersion } from '@/db/queries/systems';
import {
  booking,
  job,
  type Perturbed,
  run,
  type Scheme,
  session,
  sessionVisit,
  study,
  visit,
} from '@/db/schema';
import type { Control, SystemModel } from '@/lib/contracts';
import { storeOf } from '@/lib/server/jobs/stores';
import { workOf } from '@/lib/server/jobs/works';
import { askLayOut } from '@/lib/server/lay-out/ask-lay-out';
import { askPrediction } from '@/lib/server/predictions/ask-prediction';
import { askDesign } from '@/lib/server/series/ask-design';
import { decideSeries } from '@/lib/server/series/decide';
import { submitSeries } from '@/lib/server/series/submit';
import { acting, DAY, type FreshLab, MONDAY, plus } from './fresh-lab';

/** Answers of questions that many tests ask alike; ids stand in a question, not in its answer. */
const worked = new Map<string, unknown>();

function answerOf({ kind, input }: Pick<typeof job.$inferSelect, 'kind' | 'input'>): unknown {
  const { systemVersionId: _s, studyId: _t, predictionId: _p, ...asked } = input;
  const answer = (of: unknown) => JSON.parse(JSON.stringify(workOf[kind](of, () => {})));
  if (kind === 'lay-out') {
    // What becomes of a plan is asked here, not how good it is: little improving is enough.
    return answer({ ...input, request: { ...(input.request as object), effort: 10 } });
  }
  const key = `${kind}:${JSON.stringify(asked)}`;
  if (!worked.has(key)) worked.set(key, answer(input));
  return worked.get(key);
}

/** Works a queued job here and stores its answer, as the worker would. */
export async function workJob(db: Db, jobId: string, now = MONDAY): Promise<string | null> {
  const [row] = await db.select().from(job).where(eq(job.id, jobId));
  if (!row) throw new Error('no such job');
  const answer = answerOf(row);
  return db.transaction(async (tx) => {
    const resultId = await storeOf[row.kind](tx, row, answer, now);
    await tx
      .update(job)
      .set({ state: 'done', activeKey: null, endedAt: now, resultId })
      .where(eq(job.id, jobId));
    return resultId;
  });
}

/** Brusselator with A = 1: one onset, at B = 1 + A² = 2 (Prigogine & Lefever 1968), period 2π. */
const model: SystemModel = {
  name: 'Brusselator',
  timeUnit: 'min',
  variables: [
    { symbol: 'x', start: 1, nonnegative: true },
    { symbol: 'y', start: 1, nonnegative: true },
  ],
  parameters: [
    { symbol: 'A', value: 1, spread: { kind: 'lognormal', cv: 0.05 } },
    { symbol: 'B', value: 1.5 },
  ],
  equations: { x: 'A - (B + 1)*x + x^2*y', y: 'B*x - x^2*y' },
};
const control: Control = { symbol: 'B', from: 1, to: 3 };

export type StudyWanted = {
  perturbs?: Perturbed;
  approvalReference?: string | null;
  approvalExpires?: Date | null;
  ceilingDose?: number;
  largestStep?: number;
  timeUnit?: string;
};

/** A study with a system and a small prediction. */
export async function predictedStudy(db: Db, of: FreshLab, wanted: StudyWanted = {}) {
  const studyId = uuid();
  const createdBy = of.people.investigator.userId;
  await db.insert(study).values({
    id: studyId,
    labId: of.labId,
    title: 'Brusselator at rising feed',
    perturbs: wanted.perturbs ?? 'chemical reaction',
    rigId: of.rigId,
    doseLabel: 'Feed',
    doseUnit: 'mL/h',
    ceilingDose: wanted.ceilingDose ?? 2.8,
    largestStep: wanted.largestStep ?? 0.5,
    stopRules: 'Stop when it foams.',
    approvalReference: wanted.approvalReference ?? null,
    approvalExpires: wanted.approvalExpires ?? null,
    createdBy,
  });
  await insertSystemVersion(db, {
    id: uuid(),
    labId: of.labId,
    studyId,
    number: 1,
    model: { ...model, timeUnit: wanted.timeUnit ?? model.timeUnit },
    control,
    reason: '',
    createdBy,
    createdAt: MONDAY,
  });
  const by = acting(db, of.people.investigator);
  const { jobId } = await askPrediction(by, { studyId, systemNumber: 1, draws: 20, seed: 1 });
  const predictionId = (await workJob(db, jobId))!;
  return { studyId, predictionId };
}

export type SeriesWanted = {
  scheme?: Scheme;
  levels?: number;
  replicates?: number;
  settleCapMinutes?: number;
  recordCapMinutes?: number;
};

/** A draft of the series of a predicted study. */
export async function designedSeries(
  db: Db,
  of: FreshLab,
  about: { studyId: string; predictionId: string },
  wanted: SeriesWanted = {},
): Promise<string> {
  const by = acting(db, of.people.investigator);
  const { jobId } = await askDesign(by, {
    ...about,
    onsets: [0],
    scheme: wanted.scheme ?? 'climb',
    order: wanted.scheme === 'parallel' ? 'randomised' : 'ascending',
    levels: wanted.levels ?? 2,
    replicates: wanted.replicates ?? 1,
    doubtFactor: 1.1,
    settleCapMinutes: wanted.settleCapMinutes ?? 60,
    recordCapMinutes: wanted.recordCapMinutes ?? 120,
    reason: '',
  });
  return (await workJob(db, jobId))!;
}

/** The newest version of a study's series, as forms name it. */
export async function newestVersion(db: Db, of: FreshLab, studyId: string) {
  const [version] = await seriesVersions(db, { labId: of.labId, studyId });
  if (!version) throw new Error('the study has no series');
  return { ...version, ref: { studyId, seriesVersionId: version.id, revision: version.revision } };
}

/** A study whose series is submitted and approved. */
export async function approvedStudy(
  db: Db,
  of: FreshLab,
  wanted: StudyWanted & SeriesWanted = {},
  now = MONDAY,
) {
  const about = await predictedStudy(db, of, wanted);
  await designedSeries(db, of, about, wanted);
  const draft = await newestVersion(db, of, about.studyId);
  await submitSeries(acting(db, of.people.investigator, now), draft.ref);
  const submitted = await newestVersion(db, of, about.studyId);
  await decideSeries(acting(db, of.people.head, now), {
    ...submitted.ref,
    decision: 'approve',
    words: 'Good.',
  });
  return { ...about, version: await newestVersion(db, of, about.studyId) };
}

/** Asks for a lay-out from `now` on; the job waits. */
export async function askedLayOut(db: Db, of: FreshLab, studyId: string, now = MONDAY, days = 60) {
  const version = await newestVersion(db, of, studyId);
  return askLayOut(acting(db, of.people.investigator, now), {
    ...version.ref,
    notBefore: now.toISOString(),
    notAfter: plus(now, days * DAY).toISOString(),
  });
}

/** A study with an approved series on the calendar. */
export async function laidOutStudy(
  db: Db,
  of: FreshLab,
  wanted: StudyWanted & SeriesWanted = {},
  now = MONDAY,
) {
  const about = await approvedStudy(db, of, wanted, now);
  const { jobId } = await askedLayOut(db, of, about.studyId, now);
  await workJob(db, jobId, now);
  return { ...about, rows: await calendarOf(db, about.studyId) };
}

/** The sessions of a study with run, booking and visits, in order of time. */
export async function calendarOf(db: Db, studyId: string) {
  const rows = await db
    .select({ session, booking, run })
    .from(session)
    .innerJoin(booking, eq(booking.id, session.bookingId))
    .innerJoin(run, eq(run.id, booking.runId))
    .where(eq(session.studyId, studyId))
    .orderBy(asc(session.startsAt));
  const links = await db
    .select({ sessionId: sessionVisit.sessionId, visit })
    .from(sessionVisit)
    .innerJoin(visit, eq(visit.id, sessionVisit.visitId))
    .innerJoin(run, eq(run.id, visit.runId))
    .where(eq(run.studyId, studyId))
    .orderBy(asc(visit.atMinutes));
  return rows.map((r) => ({
    ...r,
    visits: links.filter((l) => l.sessionId === r.session.id).map((l) => l.visit),
  }));
}
export type CalendarRow = Awaited<ReturnType<typeof calendarOf>>[number];
