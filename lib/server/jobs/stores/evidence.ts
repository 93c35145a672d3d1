import { v7 as uuid } from 'uuid';
import { standingVerdict, verdictsOfRuns } from '@/db/queries/readings';
import { onsetEstimate, runVerdict } from '@/db/schema';
import { engineVersion } from '@/lib/sim/engine-version';
import { audit } from '../../audit';
import type { EvidencePlan } from '../../evidence/plan';
import type { Store } from '../kind';
import type { EvidenceResult } from '../works/evidence';

/** Appends the verdicts that are new, and the estimate; nothing older is changed. */
export const storeEvidence: Store = async (tx, job, raw, now) => {
  const plan = job.input as EvidencePlan;
  const result = raw as EvidenceResult;
  const known = await verdictsOfRuns(tx, {
    labId: job.labId,
    runIds: result.judged.map((j) => j.runId),
  });
  for (const { runId, readout, answer } of result.judged) {
    const { computed } = standingVerdict(known.filter((v) => v.runId === runId));
    if (computed && JSON.stringify(computed.answer) === JSON.stringify(answer)) continue;
    await tx.insert(runVerdict).values({
      id: uuid(),
      labId: job.labId,
      runId,
      kind: 'computed',
      verdict: answer.verdict,
      readout,
      answer,
      engineVersion,
      createdAt: now,
    });
    await audit(tx, {
      labId: job.labId,
      actorId: null,
      event: 'verdict.computed',
      studyId: plan.studyId,
      subjectId: runId,
      data: { verdict: answer.verdict, engineVersion },
    });
  }
  const estimateId = uuid();
  await tx.insert(onsetEstimate).values({
    id: estimateId,
    labId: job.labId,
    studyId: plan.studyId,
    predictionId: plan.predictionId,
    requests: result.requests,
    answers: result.answers,
    runsJudged: plan.runs.length,
    engineVersion,
    createdAt: now,
  });
  await audit(tx, {
    labId: job.labId,
    actorId: null,
    event: 'onset.estimated',
    studyId: plan.studyId,
    subjectId: estimateId,
    data: { runs: plan.runs.length },
  });
  return estimateId;
};
