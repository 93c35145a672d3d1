'use server';

import { revalidatePath } from 'next/cache';
import { moveForm } from '@/lib/contracts/forms/series';
import { labAction } from '@/lib/server/action';
import { moveSession } from '@/lib/server/sessions/move-session';

export const moveSessionAction = labAction({
  action: 'move session',
  input: moveForm,
  handle: async (context, input) => {
    const moved = await moveSession(context, input);
    revalidatePath('/calendar');
    return moved;
  },
});
