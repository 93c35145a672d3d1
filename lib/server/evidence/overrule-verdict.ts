import { and, eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import type { z } from 'zod';
import { standingVerdict, verdictsOfRuns } from '@/db/queries/readings';
import { run, runVerdict } from '@/db/schema';
import type { overruleForm } from '@/lib/contracts/forms/readings';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError, notFound } from '../errors';
import { askEvidence } from './ask-evidence';

/**
 * Puts another verdict before the computed one, with a reason, and asks for the onset anew. Nothing
 * older is changed; whoever looked at an older verdict is told first.
 */
export async function overruleVerdict(
  { db, member, now }: ActionContext,
  input: z.output<typeof overruleForm>,
): Promise<{ verdictId: string; jobId: string | null }> {
  return db.transaction(async (tx) => {
    const [of] = await tx
      .select({ id: run.id, number: run.number })
      .from(run)
      .where(
        and(eq(run.id, input.runId), eq(run.studyId, input.studyId), eq(run.labId, member.labId)),
      )
      .for('update');
    if (!of) throw notFound('run');
    const known = await verdictsOfRuns(tx, { labId: member.labId, runIds: [of.id] });
    const { standing } = standingVerdict(known);
    if (!standing) {
      throw new AppError('not-possible', `Run ${of.number} has no verdict to overrule.`, {
        mend: 'Upload its readings first; a verdict follows from them.',
      });
    }
    if (standing.id !== input.seenVerdictId) {
      throw new AppError(
        'conflict',
        `The verdict of run ${of.number} was changed meanwhile: it is ${standing.verdict} now.`,
        { mend: 'Reload the page to see why, then decide again.' },
      );
    }
    const verdictId = uuid();
    await tx.insert(runVerdict).values({
      id: verdictId,
      labId: member.labId,
      runId: of.id,
      kind: 'overruled',
      verdict: input.verdict,
      readout: standing.readout,
      reason: input.reason,
      byId: member.userId,
      createdAt: now,
    });
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'verdict.overruled',
      studyId: input.studyId,
      subjectId: of.id,
      data: { from: standing.verdict, to: input.verdict, reason: input.reason },
    });
    const asked = await askEvidence(tx, {
      labId: member.labId,
      studyId: input.studyId,
      askedBy: member.userId,
    });
    return { verdictId, jobId: asked?.jobId ?? null };
  });
}
