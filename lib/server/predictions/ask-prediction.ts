import { lockStudy } from '@/db/queries/studies';
import { latestSystem } from '@/db/queries/systems';
import type { PredictRequest } from '@/lib/contracts';
import type { AskPredictionInput } from '@/lib/contracts/forms/study';
import { stampText } from '@/lib/format';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError, notFound } from '../errors';
import { enqueue } from '../jobs/queue';

type Context = Pick<ActionContext, 'db' | 'member' | 'now'>;

/** What a predict job is given; `request` alone goes to the engine. */
export type PredictJobInput = { systemVersionId: string; request: PredictRequest };

/**
 * Asks for a prediction from the newest system. Whoever looked at an older version is told, since
 * they would get an answer to a question they did not see. The same question in work is one job.
 */
export async function askPrediction(
  { db, member }: Context,
  input: AskPredictionInput,
): Promise<{ jobId: string; joined: boolean }> {
  const { labId, userId } = member;
  const { studyId, draws, seed } = input;
  return db.transaction(async (tx) => {
    if (!(await lockStudy(tx, { labId, studyId }))) throw notFound('study');
    const system = await latestSystem(tx, { labId, studyId });
    if (!system) {
      throw new AppError('not-possible', 'This study has no system to predict from.', {
        mend: 'Write its system first.',
      });
    }
    if (system.number !== input.systemNumber) {
      const when = stampText(system.createdAt, member.lab.timeZone);
      throw new AppError(
        'conflict',
        `${system.createdByName} saved System v${system.number} on ${when}; you were looking at v${input.systemNumber}. Nothing was started.`,
        { at: 'systemNumber', mend: 'Reload this page, look at the new version, then predict.' },
      );
    }
    const { model, control } = system;
    const request: PredictRequest = { model, control, draws, seed, cycles: true };
    const question: PredictJobInput = { systemVersionId: system.id, request };
    const asked = { labId, studyId, askedBy: userId, kind: 'predict' as const, input: question };
    const job = await enqueue(tx, asked);
    if (!job.joined) {
      await audit(tx, {
        labId,
        actorId: userId,
        event: 'prediction.asked',
        studyId,
        subjectId: job.jobId,
        data: { systemNumber: system.number, draws, seed },
      });
    }
    return job;
  });
}
