import type { EstimateLevel, EstimateRequest, JudgeRequest } from '@/lib/contracts';

/** One run as the evidence job sees it: judged anew where it has readings. */
export type EvidenceRun = {
  runId: string;
  readout: string | null;
  judge: JudgeRequest | null;
  level: EstimateLevel;
  /** The verdict was overruled or published: a new computed one is kept beside it and does not count. */
  fixed: boolean;
  /** What was done to the record before it was judged, in words that stand with its verdict. */
  said: string[];
};

export type EvidencePlan = {
  studyId: string;
  predictionId: string | null;
  runs: EvidenceRun[];
  /** One an onset that was predicted; a single one without `predicted` where none was. */
  targets: Pick<EstimateRequest, 'predicted' | 'oscillates'>[];
};
