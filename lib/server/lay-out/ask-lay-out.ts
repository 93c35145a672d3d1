import type { z } from 'zod';
import type { layOutForm } from '@/lib/contracts/forms/series';
import type { ActionContext } from '../action';
import { AppError } from '../errors';
import { enqueue } from '../jobs/queue';
import { approvedUntil, assertApprovable } from '../series/approvable';
import { lockSeries } from '../series/lock';
import { heldByStop } from '../stops/held-by-stop';
import { buildLayOutPlan } from './build-plan';

const LONGEST_DAYS = 400;

/** Asks for a lay-out of an approved version; nothing is placed before the head has approved it. */
export async function askLayOut(
  { db, member, now }: ActionContext,
  input: z.output<typeof layOutForm>,
): Promise<{ jobId: string }> {
  const notBefore = new Date(Math.max(new Date(input.notBefore).getTime(), now.getTime()));
  const wanted = new Date(input.notAfter);
  return db.transaction(async (tx) => {
    const { study, version, levels } = await lockSeries(tx, {
      labId: member.labId,
      studyId: input.studyId,
      seriesVersionId: input.seriesVersionId,
      revision: input.revision,
    });
    if (version.state !== 'approved') {
      throw new AppError(
        'not-possible',
        `Version ${version.number} is ${version.state}, not approved.`,
        {
          mend: 'The head approves a version on the Series page; then it can be laid out.',
        },
      );
    }
    assertApprovable(study, version, levels, now);
    const ends = [wanted, study.approvalExpires, approvedUntil(version)].filter((d) => d !== null);
    const notAfter = new Date(Math.min(...ends.map((d) => d.getTime())));
    const days = (notAfter.getTime() - notBefore.getTime()) / 86_400_000;
    if (!(days > 0 && days <= LONGEST_DAYS)) {
      throw new AppError(
        'invalid-input',
        `The last day must lie within ${LONGEST_DAYS} days after the first.`,
        {
          at: 'notAfter',
        },
      );
    }
    const plan = await buildLayOutPlan(tx, { member, study, version, levels, notBefore, notAfter });
    const held = await heldByStop(tx, {
      labId: member.labId,
      studyId: study.id,
      runs: plan.runs.map((r) => ({ preparationId: r.preparation.id, dose: r.dose })),
    });
    if (held) {
      throw new AppError('not-possible', held, {
        mend: 'The lab head lifts it, with a reason; then lay out again.',
      });
    }
    const { jobId } = await enqueue(tx, {
      labId: member.labId,
      studyId: study.id,
      askedBy: member.userId,
      kind: 'lay-out',
      input: plan,
    });
    return { jobId };
  });
}
