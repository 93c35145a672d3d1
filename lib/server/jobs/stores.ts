import type { JobKind } from '@/db/schema';
import type { Store } from './kind';
import { storeDesign } from './stores/design';
import { storeEvidence } from './stores/evidence';
import { storeLayOut } from './stores/lay-out';
import { storePredict } from './stores/predict';

/** What becomes of each kind's answer. */
export const storeOf: Record<JobKind, Store> = {
  predict: storePredict,
  design: storeDesign,
  'lay-out': storeLayOut,
  evidence: storeEvidence,
};
