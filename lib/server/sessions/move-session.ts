import { and, eq, sql } from 'drizzle-orm';
import type { z } from 'zod';
import type { Transaction } from '@/db/client';
import { booking, run, seriesVersion, session, visit } from '@/db/schema';
import type { moveForm } from '@/lib/contracts/forms/series';
import { conflictsOfMove } from '@/lib/planner/lay-out/move';
import type { MoveLab } from '@/lib/planner/lay-out/move-types';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError } from '../errors';
import { whenInWords } from '../outbox/compose';
import { queueNotice, queueReminders, retireSession } from '../outbox/enqueue';
import { approvedUntil } from '../series/approvable';
import { lockSession } from './lock-session';
import { moveLab } from './move-lab';

type Locked = Awaited<ReturnType<typeof lockSession>>;
type Session = Locked['session'];
type Target = { session: Session; startsAt: Date; endsAt: Date; personId: string };

const later = (at: Date, ms: number) => new Date(at.getTime() + ms);

/** Moving the setting of a dose shifts its whole run; any other visit moves alone, in its window. */
async function targetsOf(
  tx: Transaction,
  locked: Locked,
  wanted: { startsAt: Date; personId: string },
): Promise<{ targets: Target[]; shiftMs: number }> {
  const { session: s } = locked;
  const shift = wanted.startsAt.getTime() - s.startsAt.getTime();
  const first: Target = {
    session: s,
    startsAt: wanted.startsAt,
    endsAt: later(s.endsAt, shift),
    personId: wanted.personId,
  };
  const setsDose = locked.visits.some((v) => v.kind === 'set dose');
  if (!setsDose || shift === 0) return { targets: [first], shiftMs: 0 };
  const siblings = await tx
    .select()
    .from(session)
    .where(and(eq(session.bookingId, locked.booking.id), eq(session.state, 'planned')))
    .for('update');
  const others = siblings
    .filter((o) => o.id !== s.id)
    .map((o) => ({
      session: o,
      startsAt: later(o.startsAt, shift),
      endsAt: later(o.endsAt, shift),
      personId: o.personId,
    }));
  return { targets: [first, ...others], shiftMs: shift };
}

/** The calendar as it would be with everything in its new place; windows move with their run. */
function calendarAfter(lab: MoveLab, locked: Locked, targets: Target[], shiftMs: number): MoveLab {
  const moved = new Map(targets.map((t) => [t.session.id, t]));
  const iso = (text: string | undefined) =>
    text === undefined ? undefined : later(new Date(text), shiftMs).toISOString();
  return {
    ...lab,
    sessions: lab.sessions.map((s) => {
      const t = moved.get(s.id);
      if (!t) return s;
      return {
        ...s,
        people: [t.personId],
        from: t.startsAt.toISOString(),
        to: t.endsAt.toISOString(),
        ...(shiftMs === 0 ? {} : { earliest: iso(s.earliest), latest: iso(s.latest) }),
      };
    }),
    occupations: lab.occupations?.map((o) =>
      o.booking === locked.booking.id ? { ...o, from: iso(o.from)!, to: iso(o.to)! } : o,
    ),
  };
}

function conflictsOf(lab: MoveLab, locked: Locked, targets: Target[], shiftMs: number): string[] {
  const after = calendarAfter(lab, locked, targets, shiftMs);
  const stay = {
    from: later(locked.booking.from, shiftMs).toISOString(),
    to: later(locked.booking.to, shiftMs).toISOString(),
  };
  const texts = targets.flatMap((t) =>
    conflictsOfMove(after, {
      session: t.session.id,
      from: t.startsAt.toISOString(),
      to: t.endsAt.toISOString(),
      people: [t.personId],
      ...(shiftMs === 0 ? {} : { occupation: stay }),
    }).map((c) => c.text),
  );
  return [...new Set(texts)];
}

async function writeMove(
  tx: Transaction,
  context: ActionContext,
  locked: Locked,
  targets: Target[],
  shiftMs: number,
): Promise<void> {
  const { member, now } = context;
  for (const t of targets) {
    const sequence = t.session.sequence + 1;
    await tx
      .update(session)
      .set({
        startsAt: t.startsAt,
        endsAt: t.endsAt,
        personId: t.personId,
        sequence,
        revision: sql`${session.revision} + 1`,
        state: 'planned',
        changedBy: member.userId,
        changedAt: now,
      })
      .where(eq(session.id, t.session.id));
    await retireSession(tx, { labId: member.labId, sessionIds: [t.session.id] });
    await queueReminders(tx, {
      labId: member.labId,
      studyId: locked.study.id,
      sessionId: t.session.id,
      personId: t.personId,
      startsAt: t.startsAt,
      sequence,
      now,
    });
  }
  if (shiftMs === 0) return;
  const stay = {
    from: later(locked.booking.from, shiftMs),
    to: later(locked.booking.to, shiftMs),
  };
  await tx.update(booking).set(stay).where(eq(booking.id, locked.booking.id));
  await tx
    .update(run)
    .set({ plannedStart: stay.from, plannedEnd: stay.to })
    .where(eq(run.id, locked.run.id));
  // To the millisecond, as sessions are: a window rounded off would refuse the run's next move.
  const microseconds = shiftMs * 1000;
  await tx
    .update(visit)
    .set({
      earliest: sql`${visit.earliest} + interval ${microseconds} microsecond`,
      latest: sql`${visit.latest} + interval ${microseconds} microsecond`,
    })
    .where(and(eq(visit.runId, locked.run.id), eq(visit.labId, member.labId)));
}

/** Tells whoever had, and whoever has, a session that somebody else moved. */
async function tellMoved(
  tx: Transaction,
  context: ActionContext,
  locked: Locked,
  targets: Target[],
): Promise<void> {
  const { member, now } = context;
  for (const t of targets) {
    const was = whenInWords(t.session.startsAt, t.session.endsAt, member.lab.timeZone);
    const passed = t.personId !== t.session.personId;
    const notices = passed
      ? [
          { kind: 'assigned' as const, to: t.personId, said: '' },
          {
            kind: 'moved' as const,
            to: t.session.personId,
            said: `${was}, given to somebody else`,
          },
        ]
      : [{ kind: 'moved' as const, to: t.personId, said: was }];
    for (const n of notices) {
      if (n.to === member.userId) continue;
      await queueNotice(tx, {
        labId: member.labId,
        kind: n.kind,
        slot: `${n.kind}:${t.session.id}:${n.to}:${t.session.sequence + 1}`,
        recipientId: n.to,
        studyId: locked.study.id,
        sessionId: t.session.id,
        sequence: t.session.sequence + 1,
        data: { by: member.name, said: n.said },
        now,
      });
    }
  }
}

/** The last day of the approval that this run was planned under. */
async function approvedUntilOf(tx: Transaction, of: Locked['run']): Promise<Date | null> {
  const [version] = await tx
    .select({ envelope: seriesVersion.envelope })
    .from(seriesVersion)
    .where(and(eq(seriesVersion.id, of.seriesVersionId), eq(seriesVersion.labId, of.labId)));
  return version ? approvedUntil(version) : null;
}

function refuseUnlessOwn(context: ActionContext, locked: Locked, personId: string): void {
  if (context.allowance !== 'own') return;
  const mine = locked.session.personId === context.member.userId;
  if (mine && personId === context.member.userId) return;
  throw new AppError('forbidden', 'As technician you move your own visits only.', {
    mend: 'Ask an investigator or the head.',
  });
}

/**
 * Moves or reassigns a session. Refused with every reason when it breaks a rule; refused with a name
 * when somebody else changed it first. Within one transaction: change, audit, reminders, mails.
 */
export async function moveSession(context: ActionContext, input: z.output<typeof moveForm>) {
  const { db, member, now } = context;
  return db.transaction(async (tx) => {
    const locked = await lockSession(tx, { labId: member.labId, ...input });
    const personId = input.personId ?? locked.session.personId;
    refuseUnlessOwn(context, locked, personId);
    if (locked.session.state !== 'planned' && locked.session.state !== 'missed') {
      throw new AppError(
        'conflict',
        `This session is ${locked.session.state}; it stays where it is.`,
      );
    }
    const startsAt = new Date(input.startsAt);
    if (startsAt.getTime() < now.getTime()) {
      throw new AppError('not-possible', 'That time has passed.', { at: 'startsAt' });
    }
    const { targets, shiftMs } = await targetsOf(tx, locked, { startsAt, personId });
    if (shiftMs !== 0 && context.allowance === 'own') {
      throw new AppError('forbidden', 'Moving the setting of a dose moves its whole run.', {
        mend: 'Ask an investigator or the head.',
      });
    }
    const expiries = [locked.study.approvalExpires, await approvedUntilOf(tx, locked.run)];
    if (expiries.some((expiry) => expiry && targets.some((t) => t.endsAt > expiry))) {
      throw new AppError('not-possible', 'The approval of this study expires before then.', {
        at: 'startsAt',
      });
    }
    // A run of weeks moves as a whole: all of its sessions are asked about, where they were and will be.
    const around = targets.flatMap((t) => [t.session.startsAt, t.startsAt]);
    const lab = await moveLab(tx, { member, around });
    const conflicts = conflictsOf(lab, locked, targets, shiftMs);
    if (conflicts.length > 0) {
      throw new AppError('not-possible', conflicts.join(' '), { at: 'startsAt' });
    }
    await writeMove(tx, context, locked, targets, shiftMs);
    await tellMoved(tx, context, locked, targets);
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: personId === locked.session.personId ? 'session.moved' : 'session.assigned',
      studyId: locked.study.id,
      subjectId: locked.session.id,
      data: {
        from: locked.session.startsAt.toISOString(),
        to: startsAt.toISOString(),
        personId,
        wholeRun: shiftMs !== 0,
      },
    });
    return { sessionId: locked.session.id, moved: targets.length };
  });
}
