import { eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import type { Db } from '@/db/client';
import { latestEstimate } from '@/db/queries/estimates';
import { latestPrediction } from '@/db/queries/predictions';
import { seriesVersions } from '@/db/queries/series';
import { insertSystemVersion } from '@/db/queries/systems';
import { job, membership, rig, run, study, user, workingHours } from '@/db/schema';
import type { Control, SystemModel } from '@/lib/contracts';
import { askEvidence } from '@/lib/server/evidence/ask-evidence';
import { onsetView } from '@/lib/server/evidence/onset-view';
import { runRows } from '@/lib/server/evidence/run-rows';
import { storeOf } from '@/lib/server/jobs/stores';
import { workOf } from '@/lib/server/jobs/works';
import { askLayOut } from '@/lib/server/lay-out/ask-lay-out';
import type { Member } from '@/lib/server/member';
import { askPrediction } from '@/lib/server/predictions/ask-prediction';
import { askDesign } from '@/lib/server/series/ask-design';
import { decideSeries } from '@/lib/server/series/decide';
import { submitSeries } from '@/lib/server/series/submit';
import { brusselator, brusselatorControl, newLab, studyFields } from './studies-fixture';

export const NOW = new Date('2026-12-01T08:00:00Z');

export type EvidenceLab = Awaited<ReturnType<typeof evidenceLab>>;

/** A lab with all four roles, a rig that records by itself, and hours around the clock. */
export async function evidenceLab(db: Db) {
  const lab = await newLab(db, 'UTC');
  await db.update(rig).set({ recordsItself: true }).where(eq(rig.id, lab.rigId));
  const join = async (role: 'technician' | 'observer', name: string): Promise<Member> => {
    const userId = uuid();
    const email = `${userId}@example.org`;
    await db.insert(user).values({ id: userId, email, name, passwordHash: '-' });
    await db.insert(membership).values({ id: uuid(), labId: lab.labId, userId, role, skills: [] });
    return { ...lab.head, userId, name, email, role };
  };
  const technician = await join('technician', 'Tove Technician');
  for (const person of [lab.head, lab.investigator, technician]) {
    await db.insert(workingHours).values({
      id: uuid(),
      labId: lab.labId,
      userId: person.userId,
      rrule: 'FREQ=DAILY',
      from: '00:00',
      to: '23:59',
    });
  }
  return { ...lab, technician, observer: await join('observer', 'Olga Observer') };
}

export const contextOf = (db: Db, member: Member, now = NOW) => ({
  db,
  member,
  now,
  allowance: 'yes' as const,
});

/** Works a queued job out here and stores it, as the worker does. */
export async function workJob(db: Db, jobId: string, now = NOW): Promise<string | null> {
  const [row] = await db.select().from(job).where(eq(job.id, jobId));
  if (!row) throw new Error('no such job');
  const answer = JSON.parse(JSON.stringify(workOf[row.kind](row.input, () => {})));
  return db.transaction(async (tx) => {
    const resultId = await storeOf[row.kind](tx, row, answer, now);
    await tx
      .update(job)
      .set({ state: 'done', activeKey: null, endedAt: now, resultId })
      .where(eq(job.id, jobId));
    return resultId;
  });
}

type Wanted = {
  model?: SystemModel;
  control?: Control;
  draws?: number;
  over?: Record<string, unknown>;
};

/** A study with a system and its prediction. */
export async function predictedStudy(db: Db, lab: EvidenceLab, wanted: Wanted = {}) {
  const { approvalExpires: _, ...fields } = studyFields({ rigId: lab.rigId, ...wanted.over });
  const by = { labId: lab.labId, createdBy: lab.head.userId };
  await db.insert(study).values({ ...fields, ...by });
  await insertSystemVersion(db, {
    ...by,
    id: uuid(),
    studyId: fields.id,
    number: 1,
    model: wanted.model ?? brusselator,
    control: wanted.control ?? brusselatorControl,
    reason: '',
    createdAt: NOW,
  });
  const asked = await askPrediction(contextOf(db, lab.investigator), {
    studyId: fields.id,
    systemNumber: 1,
    draws: wanted.draws ?? 60,
    seed: 1,
  });
  const predictionId = (await workJob(db, asked.jobId))!;
  return { studyId: fields.id, predictionId };
}

/** The newest version of the series, approved by the head and laid out. */
export async function approveAndLayOut(db: Db, lab: EvidenceLab, studyId: string, now = NOW) {
  const newest = async () => (await seriesVersions(db, { labId: lab.labId, studyId }))[0]!;
  const ref = async () => {
    const { id, revision } = await newest();
    return { studyId, seriesVersionId: id, revision };
  };
  await submitSeries(contextOf(db, lab.investigator, now), await ref());
  if ((await newest()).state === 'submitted') {
    await decideSeries(contextOf(db, lab.head, now), {
      ...(await ref()),
      decision: 'approve',
      words: 'Good.',
    });
  }
  const { jobId } = await askLayOut(contextOf(db, lab.investigator, now), {
    ...(await ref()),
    notBefore: now.toISOString(),
    notAfter: new Date(now.getTime() + 60 * 86_400_000).toISOString(),
  });
  await workJob(db, jobId, now);
  return newest();
}

/** A predicted study with a designed, approved and laid-out series. */
export async function studyWithRuns(
  db: Db,
  lab: EvidenceLab,
  wanted: Wanted & { levels?: number; replicates?: number; scheme?: 'climb' | 'fresh' } = {},
) {
  const { studyId, predictionId } = await predictedStudy(db, lab, wanted);
  const { jobId } = await askDesign(contextOf(db, lab.investigator), {
    studyId,
    predictionId,
    onsets: [0],
    scheme: wanted.scheme ?? 'climb',
    order: 'ascending',
    levels: wanted.levels ?? 3,
    replicates: wanted.replicates ?? 1,
    doubtFactor: 1.2,
    recordCapMinutes: 120,
    settleCapMinutes: 60,
    reason: '',
  });
  await workJob(db, jobId);
  const version = await approveAndLayOut(db, lab, studyId);
  const runs = await db.select().from(run).where(eq(run.studyId, studyId)).orderBy(run.number);
  return { studyId, predictionId, version, runs };
}

/** A run as it stands after its dose was set at `at`. */
export async function setRun(
  db: Db,
  of: { runId: string; by: string; at: Date; dose: number; state?: 'settling' | 'recorded' },
) {
  await db
    .update(run)
    .set({
      state: of.state ?? 'settling',
      setAt: of.at,
      setBy: of.by,
      deliveredDose: of.dose,
    })
    .where(eq(run.id, of.runId));
}

export async function estimateNow(db: Db, lab: EvidenceLab, studyId: string) {
  const asked = await askEvidence(db, {
    labId: lab.labId,
    studyId,
    askedBy: lab.technician.userId,
  });
  await workJob(db, asked!.jobId);
  const of = { labId: lab.labId, studyId };
  const [estimate, prediction, rows] = await Promise.all([
    latestEstimate(db, of),
    latestPrediction(db, of),
    runRows(db, of),
  ]);
  const view = onsetView(estimate!, { answer: prediction!.answer, unit: '1/d', rows });
  return { estimate: estimate!, prediction: prediction!, rows, view };
}
