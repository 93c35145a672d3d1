'use server';

import { revalidatePath } from 'next/cache';
import { saveSystemInput } from '@/lib/contracts/forms/system';
import { labAction } from '@/lib/server/action';
import { saveSystemVersion } from '@/lib/server/systems/save-version';

export const saveSystem = labAction({
  action: 'write system',
  input: saveSystemInput,
  handle: async (context, input) => {
    const result = await saveSystemVersion(context, input);
    if (result.outcome === 'saved') revalidatePath(`/studies/${input.studyId}`, 'layout');
    return result;
  },
});
