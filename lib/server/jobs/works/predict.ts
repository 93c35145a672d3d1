import { z } from 'zod';
import { predictRequest } from '@/lib/contracts';
import { predict } from '@/lib/sim/predict';
import type { Work } from '../kind';

const predictJob = z.strictObject({ systemVersionId: z.uuid(), request: predictRequest });

/** Works a prediction out; touches nothing but its input. */
export const workPredict: Work = (input, progress) =>
  predict(predictJob.parse(input).request, { progress });
