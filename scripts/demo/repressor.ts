import { and, asc, eq, inArray } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { seriesVersionById } from '@/db/queries/series';
import { booking, level, reading, run, session, sessionVisit, study, visit } from '@/db/schema';
import type { SystemModel } from '@/lib/contracts';
import { recordVisit } from '@/lib/server/bench/record-visit';
import { startSession } from '@/lib/server/bench/start-session';
import { askEvidence } from '@/lib/server/evidence/ask-evidence';
import { askLayOut } from '@/lib/server/lay-out/ask-lay-out';
import { askPrediction } from '@/lib/server/predictions/ask-prediction';
import { askDesign } from '@/lib/server/series/ask-design';
import { decideSeries } from '@/lib/server/series/decide';
import { submitSeries } from '@/lib/server/series/submit';
import { createStudy } from '@/lib/server/studies/create-study';
import { saveSystemVersion } from '@/lib/server/systems/save-version';
import { simulate } from '@/lib/sim/integrate/simulate';
import { repressorLoop } from '@/lib/sim/library/repressor-loop';
import type { Stage } from './stage';

const DAY_MS = 86_400_000;
const HOUR_MS = 3_600_000;
/** Working days since the series began: a level a day, so that about three are done. */
const WORKING_DAYS_BACK = 4;
/** The invented strain is not quite the model: its inhibitor binds a little more weakly. */
const STRAIN_EC50_SHARE = 1.12;
const CONTROL = { from: 2.5, to: 24 };

/** The strain that the demo readings come from. */
function strain(controlValue: number): { model: SystemModel; alpha: number } {
  // 216 / (1 + (d/k)²): with k larger by the share, (216/α − 1) shrinks by its square.
  const ratio = (216 / controlValue - 1) / STRAIN_EC50_SHARE ** 2;
  return { model: repressorLoop.model, alpha: 216 / (1 + ratio) };
}

async function plan(stage: Stage, then: Date): Promise<string> {
  const by = stage.as('investigator', then);
  const { studyId } = await createStudy(by, {
    id: uuid(),
    from: { kind: 'library', modelId: repressorLoop.id },
    title: 'Repressor ring under inhibitor',
    summary: 'Three repressors in bacteria on the plate reader',
    perturbs: repressorLoop.perturbs,
    rigId: stage.demo.rigs.plate ?? null,
    doseLabel: repressorLoop.doseLabel,
    doseUnit: repressorLoop.doseUnit,
    ceilingDose: 95,
    largestStep: 30,
    stopRules:
      'Optical density falls by half within an hour, or a well is seen to be contaminated.',
    approvalReference: '',
    approvalExpires: null,
  });
  await stage.tx.update(study).set({ simulated: true }).where(eq(study.id, studyId));
  const { model, control } = repressorLoop;
  await saveSystemVersion(by, {
    id: uuid(),
    studyId,
    basedOn: 1,
    model,
    control: { ...control, ...CONTROL },
    reason: 'Range narrowed to what the strain tolerates',
  });
  const asked = await askPrediction(by, { studyId, systemNumber: 2, draws: 400, seed: 1 });
  const predictionId = await stage.work(asked.jobId, then);
  const design = await askDesign(by, {
    studyId,
    predictionId,
    onsets: [0],
    scheme: 'climb',
    order: 'ascending',
    levels: 4,
    replicates: 2,
    doubtFactor: 1.3,
    settleCapMinutes: 5 * 60,
    recordCapMinutes: 15 * 60,
    reason: '',
  });
  const seriesVersionId = await stage.work(design.jobId, then);
  await submitSeries(by, { studyId, seriesVersionId, revision: 1 });
  await decideSeries(stage.as('head', then), {
    studyId,
    seriesVersionId,
    revision: 2,
    decision: 'approve',
    words: 'Two preparations first; we look again after the third level.',
  });
  const version = await seriesVersionById(stage.tx, { labId: stage.demo.labId, seriesVersionId });
  const laid = await askLayOut(by, {
    studyId,
    seriesVersionId,
    revision: version?.revision ?? 0,
    notBefore: then.toISOString(),
    notAfter: new Date(then.getTime() + 60 * DAY_MS).toISOString(),
  });
  await stage.work(laid.jobId, then);
  return studyId;
}

type PastSession = {
  id: string;
  personId: string;
  startsAt: Date;
  bookingRun: typeof run.$inferSelect;
};

/** Does every session that lies before `now`, as its person would have, a few minutes late. */
async function perform(stage: Stage, studyId: string, now: Date): Promise<void> {
  const rows = await stage.tx
    .select({ session, run })
    .from(session)
    .innerJoin(booking, eq(booking.id, session.bookingId))
    .innerJoin(run, eq(run.id, booking.runId))
    .where(and(eq(session.studyId, studyId), eq(session.labId, stage.demo.labId)))
    .orderBy(asc(session.startsAt));
  const past: PastSession[] = rows
    .filter((r) => r.session.endsAt < now && r.session.state === 'planned')
    .map((r) => ({ ...r.session, bookingRun: r.run }));
  for (const [i, s] of past.entries()) {
    const at = new Date(s.startsAt.getTime() + (1 + (i % 4)) * 60_000);
    const by = stage.asUser(s.personId, at);
    await startSession(by, { sessionId: s.id, at: at.toISOString() });
    const visits = await stage.tx
      .select({ visit })
      .from(visit)
      .innerJoin(sessionVisit, eq(sessionVisit.visitId, visit.id))
      .where(eq(sessionVisit.sessionId, s.id));
    for (const { visit: v } of visits) {
      await recordVisit(by, {
        sessionId: s.id,
        visitId: v.id,
        at: at.toISOString(),
        outcome: 'done',
        remark: '',
        dose: v.kind === 'set dose' ? s.bookingRun.dose : null,
        values: [],
      });
    }
  }
}

/** Readings of every recorded run, simulated with noise from the strain. */
async function read(stage: Stage, studyId: string): Promise<void> {
  const rows = await stage.tx
    .select({ run, level })
    .from(run)
    .innerJoin(level, eq(level.id, run.levelId))
    .where(and(eq(run.studyId, studyId), inArray(run.state, ['recorded'])));
  for (const { run: r, level: l } of rows) {
    const { model, alpha } = strain(r.control);
    const course = simulate({
      model,
      set: { alpha },
      until: l.settleMinutes + l.recordMinutes,
      every: l.intervalMinutes,
      noise: true,
      seed: r.number,
    });
    const values = course.readouts.reporter ?? [];
    await stage.tx.insert(reading).values(
      course.times.map((minutes, i) => ({
        id: uuid(),
        labId: stage.demo.labId,
        runId: r.id,
        readout: 'reporter',
        minutes,
        value: Number((values[i] ?? 0).toFixed(3)),
        state: 'value' as const,
        byId: r.setBy ?? '',
      })),
    );
  }
}

function workingDaysBefore(from: Date, days: number): Date {
  let at = from;
  for (let left = days; left > 0; ) {
    at = new Date(at.getTime() - DAY_MS);
    if (at.getUTCDay() !== 0 && at.getUTCDay() !== 6) left -= 1;
  }
  return at;
}

/** The repressor ring, half-way up its series: some runs judged, the rest on the calendar. */
export async function stageRepressor(stage: Stage, now: Date): Promise<void> {
  const morning = new Date(Math.floor(now.getTime() / DAY_MS) * DAY_MS + 6 * HOUR_MS);
  const then = workingDaysBefore(morning, WORKING_DAYS_BACK);
  const studyId = await plan(stage, then);
  await perform(stage, studyId, now);
  await read(stage, studyId);
  const evidence = await askEvidence(stage.tx, {
    labId: stage.demo.labId,
    studyId,
    askedBy: stage.demo.people.investigator ?? '',
  });
  if (evidence) await stage.work(evidence.jobId, now);
}
