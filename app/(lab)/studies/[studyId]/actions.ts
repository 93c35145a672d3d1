'use server';

import { revalidatePath } from 'next/cache';
import { changeStudyInput } from '@/lib/contracts/forms/study';
import { labAction } from '@/lib/server/action';
import { changeStudy as change } from '@/lib/server/studies/change-study';

export const changeStudy = labAction({
  action: 'write system',
  input: changeStudyInput,
  handle: async (context, input) => {
    const changed = await change(context, input);
    revalidatePath('/studies', 'layout');
    return changed;
  },
});
