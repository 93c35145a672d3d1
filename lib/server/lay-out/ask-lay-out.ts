import type { z } from 'zod';
import type { Conn } from '@/db/client';
import type { layOutForm } from '@/lib/contracts/forms/series';
import type { ActionContext } from '../action';
import { AppError } from '../errors';
import { enqueue } from '../jobs/queue';
import { approvedUntil, assertApprovable, needsReference } from '../series/approvable';
import { preparationsUsed } from '../series/envelope';
import { lockSeries } from '../series/lock';
import type { SeriesVersion, Study } from '../series/types';
import { heldByStop } from '../stops/held-by-stop';
import { buildLayOutPlan } from './build-plan';
import type { LayOutPlan } from './plan';

const LONGEST_DAYS = 400;
const GRID_MS = 5 * 60_000;
/** Nobody can be at a rig the moment that a lay-out is asked for. */
const LEAD_MS = 5 * 60_000;

/** The first full five minutes that people can still be told of. */
const earliest = (now: Date) => Math.ceil((now.getTime() + LEAD_MS) / GRID_MS) * GRID_MS;

/** An approval on animals or volunteers names a number of them; those lost count as well. */
async function assertNumbers(
  conn: Conn,
  of: { study: Study; version: SeriesVersion; plan: LayOutPlan },
): Promise<void> {
  const { study, version, plan } = of;
  const most = version.envelope?.preparations;
  if (most === undefined || !needsReference(study.perturbs)) return;
  const used = await preparationsUsed(conn, { labId: study.labId, studyId: study.id });
  const all = new Set([...used, ...plan.runs.map((r) => r.preparation.id)]);
  if (all.size <= most) return;
  throw new AppError(
    'not-possible',
    `The approval is for preparations up to ${most} in number; with this lay-out they would be ${all.size}, those already worked with counted.`,
    { mend: 'Design a version with the number that is needed; the head decides on it.' },
  );
}

/** Asks for a lay-out of an approved version; nothing is placed before the head has approved it. */
export async function askLayOut(
  { db, member, now }: ActionContext,
  input: z.output<typeof layOutForm>,
): Promise<{ jobId: string }> {
  const notBefore = new Date(Math.max(new Date(input.notBefore).getTime(), earliest(now)));
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
    await assertNumbers(tx, { study, version, plan });
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
