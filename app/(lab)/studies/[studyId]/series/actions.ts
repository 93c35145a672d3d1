'use server';

import { revalidatePath } from 'next/cache';
import { decisionForm, designForm, seriesRef } from '@/lib/contracts/forms/series';
import { labAction } from '@/lib/server/action';
import { askDesign } from '@/lib/server/series/ask-design';
import { decideSeries } from '@/lib/server/series/decide';
import { submitSeries } from '@/lib/server/series/submit';

export const askDesignAction = labAction({
  action: 'write series',
  input: designForm,
  handle: askDesign,
});

export const submitSeriesAction = labAction({
  action: 'write series',
  input: seriesRef,
  handle: async (context, input) => {
    const done = await submitSeries(context, input);
    revalidatePath(`/studies/${input.studyId}`, 'layout');
    return done;
  },
});

export const decideSeriesAction = labAction({
  action: 'approve series',
  input: decisionForm,
  handle: async (context, input) => {
    const done = await decideSeries(context, input);
    revalidatePath(`/studies/${input.studyId}`, 'layout');
    return done;
  },
});
