'use server';

import { replanForm, studyRef } from '@/lib/contracts/forms/readings';
import { labAction } from '@/lib/server/action';
import { judgeAgain } from '@/lib/server/evidence/judge-again';
import { askReplan } from '@/lib/server/replan/ask-replan';

export const askReplanAction = labAction({
  action: 'write series',
  input: replanForm,
  handle: askReplan,
});

export const judgeAgainAction = labAction({
  action: 'upload readings',
  input: studyRef,
  handle: judgeAgain,
});
