import type { EstimateAnswer, EstimateRequest, JudgeAnswer } from '@/lib/contracts';
import { estimate } from '@/lib/evidence/estimate/estimate';
import { judge } from '@/lib/evidence/judge/judge';
import type { EvidencePlan } from '../../evidence/plan';
import type { Work } from '../kind';

export type EvidenceResult = {
  judged: { runId: string; readout: string; answer: JudgeAnswer }[];
  requests: EstimateRequest[];
  answers: EstimateAnswer[];
};

/** Judges each run that has a record, then estimates every onset from all of them. */
export const workEvidence: Work = (input, progress) => {
  const plan = input as EvidencePlan;
  const judged: EvidenceResult['judged'] = [];
  const levels: EstimateRequest['levels'] = [];
  plan.runs.forEach((run, i) => {
    progress(i, plan.runs.length, 'judging records');
    if (!run.judge || !run.readout) {
      levels.push(run.level);
      return;
    }
    const judgedOnly = judge(run.judge);
    const answer = { ...judgedOnly, reasons: [...judgedOnly.reasons, ...run.said] };
    judged.push({ runId: run.runId, readout: run.readout, answer });
    levels.push({
      ...run.level,
      verdict: run.fixed ? run.level.verdict : answer.verdict,
      ...(answer.amplitude ? { amplitude: answer.amplitude } : {}),
      ...(answer.growthRate ? { growthRate: answer.growthRate } : {}),
    });
  });
  progress(plan.runs.length, plan.runs.length, 'estimating the onset');
  const requests = plan.targets.map((target) => ({ levels, ...target }));
  const result: EvidenceResult = { judged, requests, answers: requests.map(estimate) };
  return result;
};
