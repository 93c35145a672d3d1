'use server';

import { revalidatePath } from 'next/cache';
import { askPredictionInput } from '@/lib/contracts/forms/study';
import { labAction } from '@/lib/server/action';
import { askPrediction as ask } from '@/lib/server/predictions/ask-prediction';

export const askPrediction = labAction({
  action: 'predict',
  input: askPredictionInput,
  handle: async (context, input) => {
    const job = await ask(context, input);
    revalidatePath(`/studies/${input.studyId}`, 'layout');
    return job;
  },
});
