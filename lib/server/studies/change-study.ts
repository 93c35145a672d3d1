import { lockStudy, updateStudy } from '@/db/queries/studies';
import type { ChangeStudyInput } from '@/lib/contracts/forms/study';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { notFound } from '../errors';
import { approvalEnd, demandRig } from './limits';

type Context = Pick<ActionContext, 'db' | 'member' | 'now'>;

/** Changes what a study says about itself; the trail keeps every value from before and after. */
export async function changeStudy(
  context: Context,
  input: ChangeStudyInput,
): Promise<{ studyId: string }> {
  const { db, member } = context;
  const { labId, userId } = member;
  const { studyId, reason, approvalExpires: _day, ...fields } = input;
  const expires = approvalEnd(context, input);
  await db.transaction(async (tx) => {
    const before = await lockStudy(tx, { labId, studyId });
    if (!before) throw notFound('study');
    if (input.rigId !== before.rigId) await demandRig(tx, { labId, rigId: input.rigId });
    const after = {
      ...fields,
      approvalReference: fields.approvalReference || null,
      approvalExpires: expires,
    };
    const changed = Object.entries(after).filter(
      ([key, value]) =>
        JSON.stringify(value) !== JSON.stringify(before[key as keyof typeof before]),
    );
    if (changed.length === 0) return;
    await updateStudy(tx, { labId, studyId, set: after });
    const was = Object.fromEntries(changed.map(([k]) => [k, before[k as keyof typeof before]]));
    await audit(tx, {
      labId,
      actorId: userId,
      event: 'study.changed',
      studyId,
      subjectId: studyId,
      data: { reason, was, is: Object.fromEntries(changed) },
    });
  });
  return { studyId };
}
