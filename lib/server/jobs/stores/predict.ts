import { v7 as uuid } from 'uuid';
import { insertPrediction } from '@/db/queries/predictions';
import { systemById } from '@/db/queries/systems';
import { predictAnswer } from '@/lib/contracts';
import type { PredictJobInput } from '../../predictions/ask-prediction';
import { JobRefused, type Store } from '../kind';

/**
 * Stores a prediction beside the system version that it was made from. A newer version saved in the
 * meantime makes it stale, which its page says; it stays true of its own version.
 */
export const storePredict: Store = async (tx, job, answer, now) => {
  const { systemVersionId, request } = job.input as PredictJobInput;
  const system = await systemById(tx, { labId: job.labId, id: systemVersionId });
  if (!system || system.studyId !== job.studyId) {
    throw new JobRefused('The system that this was predicted from is not in the study any more.');
  }
  const id = uuid();
  await insertPrediction(tx, {
    id,
    labId: job.labId,
    studyId: job.studyId,
    systemVersionId,
    jobId: job.id,
    seed: request.seed,
    engineVersion: job.engineVersion,
    request,
    answer: predictAnswer.parse(answer),
    createdAt: now,
  });
  return id;
};
