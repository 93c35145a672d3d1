import { and, eq, inArray, isNull, sql } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import type { z } from 'zod';
import type { Transaction } from '@/db/client';
import { booking, level, reading, run, session, sessionVisit, visit } from '@/db/schema';
import type { visitForm } from '@/lib/contracts/forms/bench';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError, notFound } from '../errors';
import { askEvidence } from '../evidence/ask-evidence';
import { lockSession } from '../sessions/lock-session';
import { pressTime } from './press-time';
import { setDose } from './set-dose';

type Input = z.output<typeof visitForm>;
type Locked = Awaited<ReturnType<typeof lockSession>>;
type Visit = Locked['visits'][number];

async function writeReadings(
  tx: Transaction,
  context: ActionContext,
  of: { locked: Locked; visit: Visit; input: Input; at: Date },
): Promise<void> {
  const { locked, input, at } = of;
  const setAt = locked.run.setAt;
  if (input.values.length === 0 || !setAt) return;
  await tx.insert(reading).values(
    input.values.map(({ readout, value }) => ({
      id: uuid(),
      labId: context.member.labId,
      runId: locked.run.id,
      readout,
      minutes: (at.getTime() - setAt.getTime()) / 60_000,
      value,
      state: 'value' as const,
      visitId: of.visit.id,
      byId: context.member.userId,
    })),
  );
  await audit(tx, {
    labId: context.member.labId,
    actorId: context.member.userId,
    event: 'reading.entered',
    studyId: locked.study.id,
    subjectId: locked.run.id,
    data: { values: input.values },
  });
}

/** A run records once its level has settled; it is recorded when the last visit is made. */
async function advanceRun(tx: Transaction, locked: Locked, of: { visit: Visit; at: Date }) {
  const { run: r } = locked;
  const open = await tx
    .select({ id: visit.id })
    .from(visit)
    .where(and(eq(visit.runId, r.id), isNull(visit.doneAt)));
  if (of.visit.kind === 'collect' || open.length === 0) {
    if (!['settling', 'recording'].includes(r.state) && of.visit.kind !== 'set dose') return;
    await tx.update(run).set({ state: 'recorded', endedAt: of.at }).where(eq(run.id, r.id));
    await tx.update(booking).set({ to: of.at, state: 'released' }).where(eq(booking.runId, r.id));
    return;
  }
  if (r.state !== 'settling' || !r.setAt) return;
  const [of_] = await tx.select().from(level).where(eq(level.id, r.levelId));
  const settled = (of.at.getTime() - r.setAt.getTime()) / 60_000 >= (of_?.settleMinutes ?? 0);
  if (settled) await tx.update(run).set({ state: 'recording' }).where(eq(run.id, r.id));
}

/** A session is done when each of its visits is. */
async function endSession(tx: Transaction, context: ActionContext, locked: Locked, at: Date) {
  const open = await tx
    .select({ id: visit.id })
    .from(visit)
    .innerJoin(sessionVisit, eq(sessionVisit.visitId, visit.id))
    .where(and(eq(sessionVisit.sessionId, locked.session.id), isNull(visit.doneAt)));
  if (open.length > 0) return false;
  await tx
    .update(session)
    .set({
      state: 'done',
      doneAt: at,
      revision: sql`${session.revision} + 1`,
      changedBy: context.member.userId,
      changedAt: context.now,
    })
    .where(and(eq(session.id, locked.session.id), inArray(session.state, ['started'])));
  await audit(tx, {
    labId: context.member.labId,
    actorId: context.member.userId,
    event: 'session.done',
    studyId: locked.study.id,
    subjectId: locked.session.id,
  });
  return true;
}

function assertOrder(locked: Locked, of: Visit, input: Input): void {
  if (locked.session.state === 'suspended') {
    throw new AppError('conflict', 'A stop holds this session.', {
      mend: 'Only the lab head lifts it.',
    });
  }
  if (locked.session.state !== 'started') {
    throw new AppError('conflict', `This session is ${locked.session.state}.`, {
      mend: 'Start it first.',
    });
  }
  if (of.kind === 'set dose' && input.outcome === 'skipped') {
    throw new AppError('not-possible', 'The setting of a dose cannot be skipped.', {
      mend: 'Move the session, report the preparation lost, or press stop.',
    });
  }
  if (of.kind !== 'set dose' && !locked.run.setAt) {
    throw new AppError('conflict', 'The dose of this run has not been set yet.', {
      mend: 'Do the session that sets the dose first.',
    });
  }
}

/**
 * Records one visit: done, taken late, or skipped with a reason; planned and actual time are both
 * kept. Pressing twice records once.
 */
export async function recordVisit(context: ActionContext, input: Input) {
  const { db, member, now } = context;
  return db.transaction(async (tx) => {
    const locked = await lockSession(tx, { labId: member.labId, sessionId: input.sessionId });
    const of = locked.visits.find((v) => v.id === input.visitId);
    if (!of) throw notFound('visit');
    if (of.doneAt) return { sessionDone: locked.session.state === 'done', jobId: null };
    assertOrder(locked, of, input);
    const at = pressTime(input.at, now);
    if (of.kind === 'set dose') {
      await setDose(tx, { member, study: locked.study, run: locked.run, dose: input.dose, at });
      locked.run.setAt = at;
      locked.run.state = 'settling';
    }
    await tx
      .update(visit)
      .set({
        doneAt: at,
        doneBy: member.userId,
        outcome: input.outcome,
        remark: input.remark || null,
      })
      .where(eq(visit.id, of.id));
    await writeReadings(tx, context, { locked, visit: of, input, at });
    await advanceRun(tx, locked, { visit: of, at });
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'session.step',
      studyId: locked.study.id,
      subjectId: of.id,
      data: { kind: of.kind, outcome: input.outcome, at: at.toISOString(), remark: input.remark },
    });
    const sessionDone = await endSession(tx, context, locked, at);
    const asked =
      input.values.length > 0
        ? await askEvidence(tx, {
            labId: member.labId,
            studyId: locked.study.id,
            askedBy: member.userId,
          })
        : null;
    return { sessionDone, jobId: asked?.jobId ?? null };
  });
}
