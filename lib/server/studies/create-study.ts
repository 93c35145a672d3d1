import { v7 as uuid } from 'uuid';
import { insertStudy, studyById } from '@/db/queries/studies';
import { insertSystemVersion, latestSystem } from '@/db/queries/systems';
import type { Control, SystemModel } from '@/lib/contracts';
import type { CreateStudyInput } from '@/lib/contracts/forms/study';
import { library } from '@/lib/sim/library';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError, notFound } from '../errors';
import { isDuplicate } from './duplicate';
import { approvalEnd, demandRig } from './limits';

type Context = Pick<ActionContext, 'db' | 'member' | 'now'>;
type Origin = { model: SystemModel; control: Control; libraryId: string | null; reason: string };

/** The system that a study starts from: a published model, or the newest version of a study here. */
async function originOf({ db, member }: Context, from: CreateStudyInput['from']): Promise<Origin> {
  if (from.kind === 'library') {
    const entry = library.find((m) => m.id === from.modelId);
    if (!entry) {
      throw new AppError('invalid-input', 'There is no such published model.', {
        at: 'from',
        mend: 'Choose one from the list.',
      });
    }
    const { model, control, id } = entry;
    return { model, control, libraryId: id, reason: `Published model: ${entry.title}` };
  }
  const of = { labId: member.labId, studyId: from.studyId };
  const source = await studyById(db, of);
  const system = source && (await latestSystem(db, of));
  if (!source || !system) throw notFound('study');
  return {
    model: system.model,
    control: system.control,
    libraryId: source.libraryId,
    reason: `Copy of ${source.title}, System v${system.number}`.slice(0, 300),
  };
}

/**
 * Creates a study and version 1 of its system at once. The id comes from the form: the same person's
 * second press gets the first study back.
 */
export async function createStudy(
  context: Context,
  input: CreateStudyInput,
): Promise<{ studyId: string }> {
  const { db, member, now } = context;
  const { labId, userId } = member;
  const again = async () => {
    const known = await studyById(db, { labId, studyId: input.id });
    return known?.createdBy === userId ? { studyId: known.id } : null;
  };
  const known = await again();
  if (known) return known;
  const { from, id, approvalExpires, approvalReference, ...fields } = input;
  const expires = approvalEnd(context, input);
  const origin = await originOf(context, from);
  try {
    await db.transaction(async (tx) => {
      await demandRig(tx, { labId, rigId: input.rigId });
      const by = { labId, createdBy: userId, createdAt: now };
      await insertStudy(tx, {
        ...fields,
        ...by,
        id,
        libraryId: origin.libraryId,
        approvalReference: approvalReference || null,
        approvalExpires: expires,
      });
      const { model, control, reason } = origin;
      const version = { ...by, id: uuid(), studyId: id, number: 1, model, control, reason };
      await insertSystemVersion(tx, version);
      const trail = { labId, actorId: userId, studyId: id };
      await audit(tx, {
        ...trail,
        event: 'study.created',
        subjectId: id,
        data: { title: input.title, from, ceilingDose: input.ceilingDose },
      });
      const data = { number: 1, reason };
      await audit(tx, { ...trail, event: 'system.version', subjectId: version.id, data });
    });
  } catch (error) {
    const first = isDuplicate(error) ? await again() : null;
    if (first) return first;
    if (isDuplicate(error)) throw notFound('study');
    throw error;
  }
  return { studyId: id };
}
