import type { Control, DesignRequest, PredictAnswer } from '@/lib/contracts';
import type { Scheme } from './types';

/** Input of a design job: one engine request an edge, and what its levels are timed by. */
export type DesignPlan = {
  studyId: string;
  predictionId: string;
  scheme: Scheme;
  reason: string;
  requests: DesignRequest[];
  control: Control;
  timeUnit: string;
  /** What the timing of a level needs of the prediction. */
  outlook: Pick<PredictAnswer, 'branch' | 'cycles' | 'onsets'>;
  noise: { readout: string; sd: number } | null;
  settleCapMinutes: number | null;
  recordCapMinutes: number | null;
  /** The version whose approval may cover the new one. */
  replanned: boolean;
};

export type DesignedLevel = {
  position: number;
  dose: number;
  control: number;
  purpose: 'baseline' | 'approach' | 'onset' | 'far side';
  replicates: number;
  settleMinutes: number;
  recordMinutes: number;
  intervalMinutes: number;
  notes: string[];
};
