import { lockStudy } from '@/db/queries/studies';
import { insertSystemVersion, latestSystem, systemById } from '@/db/queries/systems';
import type { SaveSystemInput, SaveSystemResult } from '@/lib/contracts/forms/system';
import { stampText } from '@/lib/format';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError, notFound } from '../errors';
import { checkSystem } from './check-system';

type Context = Pick<ActionContext, 'db' | 'member' | 'now'>;

/**
 * Saves the next version of a study's system. Versions never change: a form that was filled from an
 * older version than the newest is a conflict, and nothing is written. Saving the same id twice is
 * one version.
 */
export async function saveSystemVersion(
  { db, member, now }: Context,
  input: SaveSystemInput,
): Promise<SaveSystemResult> {
  const { labId, userId } = member;
  const { studyId, model, control, reason } = input;
  const problems = checkSystem(model, control);
  if (problems.length > 0) return { outcome: 'to mend', problems };
  return db.transaction(async (tx) => {
    if (!(await lockStudy(tx, { labId, studyId }))) throw notFound('study');
    const same = await systemById(tx, { labId, id: input.id });
    if (same) {
      if (same.studyId !== studyId || same.createdBy !== userId) throw notFound('study');
      return { outcome: 'saved', number: same.number };
    }
    const newest = await latestSystem(tx, { labId, studyId });
    if (newest && newest.number !== input.basedOn) {
      const when = stampText(newest.createdAt, member.lab.timeZone);
      throw new AppError(
        'conflict',
        `${newest.createdByName} saved System v${newest.number} on ${when}, after you opened v${input.basedOn}. Nothing was overwritten.`,
        {
          at: 'basedOn',
          mend: 'Open the newest version in another tab and bring your change into it.',
        },
      );
    }
    const number = (newest?.number ?? 0) + 1;
    await insertSystemVersion(tx, {
      id: input.id,
      labId,
      studyId,
      number,
      model,
      control,
      reason,
      createdBy: userId,
      createdAt: now,
    });
    await audit(tx, {
      labId,
      actorId: userId,
      event: 'system.version',
      studyId,
      subjectId: input.id,
      data: { number, reason },
    });
    return { outcome: 'saved', number };
  });
}
