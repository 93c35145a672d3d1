import { eq, sql } from 'drizzle-orm';
import type { z } from 'zod';
import type { Transaction } from '@/db/client';
import { peopleOfRole } from '@/db/queries/people';
import { seriesVersion } from '@/db/schema';
import type { seriesRef } from '@/lib/contracts/forms/series';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError } from '../errors';
import type { Member } from '../member';
import { queueNotice } from '../outbox/enqueue';
import { assertApprovable } from './approvable';
import { supersedeOthers } from './decide';
import { coveringApproval } from './inherit';
import { lockSeries } from './lock';
import type { SeriesVersion, Study } from './types';

async function inheritApproval(
  tx: Transaction,
  of: {
    member: Member;
    study: Study;
    version: SeriesVersion;
    covering: SeriesVersion;
    now: Date;
  },
): Promise<void> {
  const { member, study, version, covering, now } = of;
  await tx
    .update(seriesVersion)
    .set({
      state: 'approved',
      submittedAt: now,
      decidedBy: covering.decidedBy,
      decidedAt: now,
      decision: `Within the envelope approved with version ${covering.number}.`,
      envelope: covering.envelope,
      inheritedFrom: covering.id,
      revision: sql`${seriesVersion.revision} + 1`,
    })
    .where(eq(seriesVersion.id, version.id));
  await supersedeOthers(tx, { labId: member.labId, studyId: study.id, keep: version.id });
  await audit(tx, {
    labId: member.labId,
    actorId: member.userId,
    event: 'series.inherited',
    studyId: study.id,
    subjectId: version.id,
    data: { number: version.number, from: covering.number },
  });
}

/**
 * Asks the head for approval; the version cannot be changed while it waits. A version inside the
 * envelope that is approved already needs no new decision: it inherits the approval, on the record.
 */
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
    const covering = await coveringApproval(tx, study, version, levels);
    if (covering) {
      await inheritApproval(tx, { member, study, version, covering, now });
      return { seriesVersionId: version.id };
    }
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
