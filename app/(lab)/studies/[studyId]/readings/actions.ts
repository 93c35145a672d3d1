'use server';

import { revalidatePath } from 'next/cache';
import { overruleForm, studyRef } from '@/lib/contracts/forms/readings';
import { labAction } from '@/lib/server/action';
import { judgeAgain } from '@/lib/server/evidence/judge-again';
import { overruleVerdict } from '@/lib/server/evidence/overrule-verdict';

export const overruleVerdictAction = labAction({
  action: 'overrule verdict',
  input: overruleForm,
  handle: async (context, input) => {
    const done = await overruleVerdict(context, input);
    revalidatePath(`/studies/${input.studyId}`, 'layout');
    return done;
  },
});

export const judgeAgainAction = labAction({
  action: 'upload readings',
  input: studyRef,
  handle: judgeAgain,
});
