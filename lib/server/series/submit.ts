import { eq, sql } from 'drizzle-orm';
import type { z } from 'zod';
import { peopleOfRole } from '@/db/queries/people';
import { seriesVersion } from '@/db/schema';
import type { seriesRef } from '@/lib/contracts/forms/series';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError } from '../errors';
import { queueNotice } from '../outbox/enqueue';
import { assertApprovable } from './approvable';
import { lockSeries } from './lock';

/** Asks the head for approval; the version cannot be changed while it waits. */
export async function submitSeries(
  { db, member, now }: ActionContext,
  input: z.output<typeof seriesRef>,
) {
  return db.transaction(async (tx) => {
    const { study, version, levels } = await lockSeries(tx, { labId: member.labId, ...input });
    if (version.state !== 'draft') {
      throw new AppError('conflict', `Version ${version.number} is ${version.state} already.`);
    }
    assertApprovable(study, version, levels, now);
    await tx
      .update(seriesVersion)
      .set({ state: 'submitted', submittedAt: now, revision: sql`${seriesVersion.revision} + 1` })
      .where(eq(seriesVersion.id, version.id));
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'series.submitted',
      studyId: study.id,
      subjectId: version.id,
      data: { number: version.number },
    });
    for (const head of await peopleOfRole(tx, { labId: member.labId, roles: ['head'] })) {
      await queueNotice(tx, {
        labId: member.labId,
        kind: 'approval asked',
        slot: `ask:${version.id}:${version.revision}:${head.userId}`,
        recipientId: head.userId,
        studyId: study.id,
        data: { by: member.name, said: `version ${version.number} of the series` },
        now,
      });
    }
    return { seriesVersionId: version.id };
  });
}
