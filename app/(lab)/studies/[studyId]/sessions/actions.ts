'use server';

import { revalidatePath } from 'next/cache';
import { z } from 'zod';
import { layOutForm } from '@/lib/contracts/forms/series';
import { labAction } from '@/lib/server/action';
import { askLayOut } from '@/lib/server/lay-out/ask-lay-out';
import { liftStop } from '@/lib/server/stops/lift-stop';
import { pressStop } from '@/lib/server/stops/press-stop';
import { takeBackStop } from '@/lib/server/stops/take-back';

export const askLayOutAction = labAction({
  action: 'lay out',
  input: layOutForm,
  handle: askLayOut,
});

export const stopStudyAction = labAction({
  action: 'stop',
  input: z.strictObject({ studyId: z.uuid() }),
  handle: async (context, input) => {
    const stopped = await pressStop(context, input);
    revalidatePath(`/studies/${input.studyId}`, 'layout');
    return stopped;
  },
});

export const takeBackStopAction = labAction({
  action: 'stop',
  input: z.strictObject({ stopId: z.uuid() }),
  handle: async (context, input) => {
    const done = await takeBackStop(context, input);
    revalidatePath('/studies', 'layout');
    return done;
  },
});

export const liftStopAction = labAction({
  action: 'lift stop',
  input: z.strictObject({
    stopId: z.uuid(),
    reason: z.string().trim().min(1, 'say why it may go on').max(500),
  }),
  handle: async (context, input) => {
    const done = await liftStop(context, input);
    revalidatePath('/studies', 'layout');
    return done;
  },
});
