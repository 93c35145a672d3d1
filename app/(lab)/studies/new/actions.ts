'use server';

import { revalidatePath } from 'next/cache';
import { createStudyInput } from '@/lib/contracts/forms/study';
import { labAction } from '@/lib/server/action';
import { createStudy as create } from '@/lib/server/studies/create-study';

export const createStudy = labAction({
  action: 'write system',
  input: createStudyInput,
  handle: async (context, input) => {
    const made = await create(context, input);
    revalidatePath('/studies');
    return made;
  },
});
