import type { ActionContext } from '../action';
import { AppError } from '../errors';
import { askEvidence } from './ask-evidence';

/** Asks for all verdicts of a study and its observed onset anew. */
export async function judgeAgain(
  { db, member }: ActionContext,
  { studyId }: { studyId: string },
): Promise<{ jobId: string }> {
  const asked = await askEvidence(db, {
    labId: member.labId,
    studyId,
    askedBy: member.userId,
  });
  if (asked) return asked;
  throw new AppError('not-possible', 'There is nothing to judge, or nothing is predicted yet.', {
    mend: 'Predict the onset and upload readings first.',
  });
}
