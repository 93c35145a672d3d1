import { and, eq, max, sql } from 'drizzle-orm';
import type { Transaction } from '@/db/client';
import { calendarStamp } from '@/db/queries/calendar';
import { lab, run, seriesVersion, study, user } from '@/db/schema';
import { type LayOutAnswer, layOutAnswer } from '@/lib/contracts';
import { audit } from '../../audit';
import { insertRuns } from '../../lay-out/insert-runs';
import type { LayOutPlan } from '../../lay-out/plan';
import { retireUnstarted } from '../../lay-out/retire-unstarted';
import { whenInWords } from '../../outbox/compose';
import { queueNotice } from '../../outbox/enqueue';
import { heldByStop } from '../../stops/held-by-stop';
import { JobRefused, type Store } from '../kind';
import type { Job } from '../queue';

/** One change of a lab's calendar at a time; the plan must still meet the calendar it was made for. */
async function assertUnchanged(tx: Transaction, job: Job, plan: LayOutPlan) {
  const [place] = await tx.select().from(lab).where(eq(lab.id, job.labId)).for('update');
  const [version] = await tx
    .select()
    .from(seriesVersion)
    .where(and(eq(seriesVersion.id, plan.seriesVersionId), eq(seriesVersion.labId, job.labId)))
    .for('update');
  // A stop locks its study: either it comes first and is seen here, or it comes after and sees the runs.
  await tx.select({ id: study.id }).from(study).where(eq(study.id, plan.studyId)).for('update');
  if (version?.state !== 'approved' || version.revision !== plan.seriesRevision) {
    throw new JobRefused('The series was changed while it was being laid out. Nothing was placed.');
  }
  if ((await calendarStamp(tx, { labId: job.labId })) !== plan.calendarStamp) {
    throw new JobRefused(
      'The calendar was changed while the sessions were being laid out. Nothing was placed; press again.',
    );
  }
  const held = await heldByStop(tx, {
    labId: job.labId,
    studyId: plan.studyId,
    runs: plan.runs.map((r) => ({ preparationId: r.preparation.id, dose: r.dose })),
  });
  if (held) {
    throw new JobRefused(`${held} Nothing was placed; the lab head lifts it, with a reason.`);
  }
  return { version, timeZone: place?.timeZone ?? 'UTC' };
}

async function firstFreeNumber(tx: Transaction, plan: LayOutPlan): Promise<number> {
  const [row] = await tx
    .select({ most: max(run.number) })
    .from(run)
    .where(eq(run.studyId, plan.studyId));
  return (row?.most ?? 0) + 1;
}

function unplacedInWords(plan: LayOutPlan, answer: LayOutAnswer) {
  return answer.unplaced.map(({ booking, reason }) => {
    const planned = plan.runs.find((r) => r.bookingId === booking);
    const what = planned
      ? `Level ${planned.position}, preparation ${planned.preparation.code}`
      : booking;
    return { what, reason };
  });
}

async function tellPeople(
  tx: Transaction,
  of: {
    job: Job;
    plan: LayOutPlan;
    people: Set<string>;
    gone: Awaited<ReturnType<typeof retireUnstarted>>;
    timeZone: string;
    now: Date;
  },
) {
  const { job, plan, now } = of;
  const [by] = await tx.select().from(user).where(eq(user.id, job.askedBy));
  for (const recipientId of of.people) {
    await queueNotice(tx, {
      labId: job.labId,
      kind: 'assigned',
      slot: `laid-out:${job.id}:${recipientId}`,
      recipientId,
      studyId: plan.studyId,
      now,
    });
  }
  for (const s of of.gone) {
    if (s.startsAt < now) continue;
    await queueNotice(tx, {
      labId: job.labId,
      kind: 'cancelled',
      slot: `cancelled:${s.sessionId}`,
      recipientId: s.personId,
      studyId: plan.studyId,
      sessionId: s.sessionId,
      data: {
        by: by?.name ?? '',
        said: `${whenInWords(s.startsAt, s.endsAt, of.timeZone)} was laid out anew`,
      },
      now,
    });
  }
}

/** Puts the placed runs onto the calendar in the place of the study's unstarted ones. */
export const storeLayOut: Store = async (tx, job, raw, now) => {
  const plan = job.input as LayOutPlan;
  const answer = layOutAnswer.parse(raw);
  const { version, timeZone } = await assertUnchanged(tx, job, plan);
  const gone = await retireUnstarted(tx, {
    labId: job.labId,
    studyId: plan.studyId,
    by: job.askedBy,
    now,
  });
  const firstNumber = await firstFreeNumber(tx, plan);
  const people = await insertRuns(
    tx,
    { labId: job.labId, firstNumber, now },
    plan,
    answer.placements,
  );
  await tx
    .update(seriesVersion)
    .set({
      unplaced: unplacedInWords(plan, answer),
      laidOutAt: now,
      revision: sql`${seriesVersion.revision} + 1`,
    })
    .where(eq(seriesVersion.id, version.id));
  await tellPeople(tx, { job, plan, people, gone, timeZone, now });
  await audit(tx, {
    labId: job.labId,
    actorId: job.askedBy,
    event: 'sessions.laid-out',
    studyId: plan.studyId,
    subjectId: version.id,
    data: {
      placed: answer.placements.length,
      unplaced: answer.unplaced.length,
      cancelled: gone.length,
    },
  });
  return version.id;
};
