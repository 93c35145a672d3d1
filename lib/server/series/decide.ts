import { and, eq, ne, sql } from 'drizzle-orm';
import type { z } from 'zod';
import type { Transaction } from '@/db/client';
import { seriesVersion } from '@/db/schema';
import type { decisionForm } from '@/lib/contracts/forms/series';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError } from '../errors';
import { queueNotice } from '../outbox/enqueue';
import { assertApprovable, needsReference } from './approvable';
import { envelopeOf } from './envelope';
import { lockSeries } from './lock';

/** An approved version takes the place of the one before it. */
export async function supersedeOthers(
  tx: Transaction,
  of: { labId: string; studyId: string; keep: string },
): Promise<void> {
  await tx
    .update(seriesVersion)
    .set({ state: 'superseded' })
    .where(
      and(
        eq(seriesVersion.labId, of.labId),
        eq(seriesVersion.studyId, of.studyId),
        eq(seriesVersion.state, 'approved'),
        ne(seriesVersion.id, of.keep),
      ),
    );
}

/** The head approves a submitted version, or sends it back with a reason. */
export async function decideSeries(
  { db, member, now }: ActionContext,
  input: z.output<typeof decisionForm>,
) {
  return db.transaction(async (tx) => {
    const { study, version, levels } = await lockSeries(tx, { labId: member.labId, ...input });
    if (version.state !== 'submitted') {
      throw new AppError('conflict', `Version ${version.number} is ${version.state}.`, {
        mend: 'Only a submitted version can be decided on.',
      });
    }
    const approve = input.decision === 'approve';
    const own = version.createdBy === member.userId;
    if (!approve && input.words === '') {
      throw new AppError('invalid-input', 'Say what has to change.', { at: 'words' });
    }
    if (approve && own && needsReference(study.perturbs) && input.words === '') {
      throw new AppError(
        'invalid-input',
        'You wrote this version yourself. For animals and volunteers somebody else should approve it; to go on, say why not.',
        { at: 'words' },
      );
    }
    if (approve) assertApprovable(study, version, levels, now);
    await tx
      .update(seriesVersion)
      .set({
        state: approve ? 'approved' : 'draft',
        decidedBy: member.userId,
        decidedAt: now,
        decision: `${own && approve ? 'Approved by its author. ' : ''}${input.words}`,
        envelope: approve ? envelopeOf(study, version, levels) : null,
        revision: sql`${seriesVersion.revision} + 1`,
      })
      .where(eq(seriesVersion.id, version.id));
    if (approve) {
      await supersedeOthers(tx, { labId: member.labId, studyId: study.id, keep: version.id });
    }
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: approve ? 'series.approved' : 'series.sent-back',
      studyId: study.id,
      subjectId: version.id,
      data: { number: version.number, words: input.words, own },
    });
    await queueNotice(tx, {
      labId: member.labId,
      kind: approve ? 'approved' : 'sent back',
      slot: `decided:${version.id}:${version.revision}`,
      recipientId: version.createdBy,
      studyId: study.id,
      data: {
        by: member.name,
        said: approve ? `version ${version.number} of the series` : input.words,
      },
      now,
    });
    return { seriesVersionId: version.id };
  });
}
