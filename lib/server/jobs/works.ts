import type { JobKind } from '@/db/schema';
import type { Work } from './kind';
import { workDesign } from './works/design';
import { workEvidence } from './works/evidence';
import { workLayOut } from './works/lay-out';
import { workPredict } from './works/predict';

/** What each kind of job does in its thread: the pure engine and nothing else. */
export const workOf: Record<JobKind, Work> = {
  predict: workPredict,
  design: workDesign,
  'lay-out': workLayOut,
  evidence: workEvidence,
};
