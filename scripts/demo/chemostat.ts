import { eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { level, preparation, run, runVerdict, seriesVersion } from '@/db/schema';
import { askEvidence } from '@/lib/server/evidence/ask-evidence';
import { askPrediction } from '@/lib/server/predictions/ask-prediction';
import { envelopeOf } from '@/lib/server/series/envelope';
import { createStudy } from '@/lib/server/studies/create-study';
import { controlToDose } from '@/lib/sim/dose-map';
import { chemostat } from '@/lib/sim/library/chemostat';
import type { Stage } from './stage';

/**
 * Calls that follow from the paper's statements (Fussmann et al. 2000, Science 290:1358): dilution rates
 * from 0.04 to 1.37 /d, steady up to 0.32 /d, cycles from 0.64 /d and lost near 1.16 /d, where one trial
 * cycled and one did not. The calls at both ends of the range are inferred from that, and say so.
 */
const OBSERVED = [
  { control: 0.04, verdict: 'steady', preparation: 'trial 1', inferred: true },
  { control: 0.32, verdict: 'steady', preparation: 'trial 2', inferred: false },
  { control: 0.64, verdict: 'sustained', preparation: 'trial 3', inferred: false },
  { control: 1.16, verdict: 'sustained', preparation: 'trial 4', inferred: false },
  { control: 1.16, verdict: 'steady', preparation: 'trial 5', inferred: false },
  { control: 1.37, verdict: 'steady', preparation: 'trial 6', inferred: true },
] as const;

const SOURCE =
  'As published: Fussmann et al. 2000, Science 290:1358. No readings are kept here, so nothing was computed.';

const INFERRED =
  'Inferred from the published onsets (Fussmann et al. 2000, Science 290:1358: steady up to 0.32 /d, cycles lost near 1.16 /d), not stated for this rate. No readings are kept here.';

/** The published chemostat: both edges predicted, the published calls entered beside them. */
export async function stageChemostat(stage: Stage, now: Date): Promise<void> {
  const labId = stage.demo.labId;
  const by = stage.as('investigator', now);
  const { studyId } = await createStudy(by, {
    id: uuid(),
    from: { kind: 'library', modelId: chemostat.id },
    title: 'Plankton at rising dilution',
    summary: 'Rotifers on algae in a chemostat; published observations, entered by hand',
    perturbs: chemostat.perturbs,
    rigId: stage.demo.rigs.chemostat ?? null,
    doseLabel: chemostat.doseLabel,
    doseUnit: chemostat.doseUnit,
    ceilingDose: 22,
    largestStep: 12,
    stopRules: 'A vessel washes out (no rotifers in two samples in a row), or foams over.',
    approvalReference: '',
    approvalExpires: null,
  });
  const asked = await askPrediction(by, { studyId, systemNumber: 1, draws: 400, seed: 1 });
  const predictionId = await stage.work(asked.jobId, now);
  const tx = stage.tx;
  const seriesVersionId = uuid();
  const doses = [...new Set(OBSERVED.map((o) => o.control))].map((control) => ({
    id: uuid(),
    control,
    dose: controlToDose(chemostat.control.doseMap, control) ?? 0,
  }));
  const study = { ceilingDose: 22, largestStep: 12, approvalExpires: null };
  await tx.insert(seriesVersion).values({
    id: seriesVersionId,
    labId,
    studyId,
    number: 1,
    predictionId,
    state: 'approved',
    scheme: 'fresh',
    order: 'randomised',
    replicates: 1,
    designs: [],
    notes: ['The levels of the published trials, each in a vessel of its own.'],
    reason: 'published trials',
    envelope: envelopeOf(study, { scheme: 'fresh', replicates: 1 }, doses),
    createdBy: by.member.userId,
    submittedAt: now,
    decidedBy: stage.demo.people.head ?? null,
    decidedAt: now,
    decision: 'Entered as published.',
  });
  await tx.insert(level).values(
    doses.map((d, i) => ({
      id: d.id,
      labId,
      seriesVersionId,
      position: i + 1,
      dose: d.dose,
      control: d.control,
      purpose: 'onset' as const,
      replicates: 1,
      // The paper judged day 20 to the end of a trial; trials lasted 16 to 120 days.
      settleMinutes: 20 * 1440,
      recordMinutes: 40 * 1440,
      intervalMinutes: 1440,
      notes: [],
    })),
  );
  for (const [i, o] of OBSERVED.entries()) {
    const at = doses.find((d) => d.control === o.control)!;
    const preparationId = uuid();
    const runId = uuid();
    await tx.insert(preparation).values({
      id: preparationId,
      labId,
      studyId,
      code: o.preparation,
      endedAt: now,
      endReason: 'trial ended, as published',
    });
    await tx.insert(run).values({
      id: runId,
      labId,
      studyId,
      seriesVersionId,
      levelId: at.id,
      preparationId,
      number: i + 1,
      state: 'recorded',
      dose: at.dose,
      control: o.control,
      deliveredDose: at.dose,
      endedAt: now,
      endReason: 'as published',
    });
    await tx.insert(runVerdict).values({
      id: uuid(),
      labId,
      runId,
      kind: 'published',
      verdict: o.verdict,
      reason: o.inferred ? INFERRED : SOURCE,
      byId: by.member.userId,
      createdAt: now,
    });
  }
  await tx
    .update(seriesVersion)
    .set({ laidOutAt: now })
    .where(eq(seriesVersion.id, seriesVersionId));
  const evidence = await askEvidence(tx, { labId, studyId, askedBy: by.member.userId });
  if (!evidence) throw new Error('the published observations gave no evidence');
  await stage.work(evidence.jobId, now);
}
