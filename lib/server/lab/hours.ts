import { and, eq } from 'drizzle-orm';
import type { z } from 'zod';
import type { Transaction } from '@/db/client';
import { absence, membership, rig, workingHours } from '@/db/schema';
import type { absenceForm, hoursForm, removeForm } from '@/lib/contracts/forms/lab';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { notFound } from '../errors';

async function assertOwn(
  tx: Transaction,
  of: { labId: string; userId: string | null; rigId: string | null },
): Promise<void> {
  const [found] = of.userId
    ? await tx
        .select({ id: membership.id })
        .from(membership)
        .where(and(eq(membership.labId, of.labId), eq(membership.userId, of.userId)))
    : of.rigId
      ? await tx
          .select({ id: rig.id })
          .from(rig)
          .where(and(eq(rig.labId, of.labId), eq(rig.id, of.rigId)))
      : [{ id: of.labId }];
  if (!found) throw notFound(of.userId ? 'person' : 'rig');
}

/** Adds working hours of a person, or opening hours of a rig, as a weekly recurrence. */
export async function addHours({ db, member }: ActionContext, input: z.output<typeof hoursForm>) {
  const { labId } = member;
  const rrule = `FREQ=WEEKLY;BYDAY=${input.days.join(',')}`;
  return db.transaction(async (tx) => {
    await assertOwn(tx, { labId, ...input });
    const { id, userId, rigId, from, to } = input;
    // The id is made by the form: a second press adds nothing.
    await tx.insert(workingHours).ignore().values({ id, labId, userId, rigId, rrule, from, to });
    await audit(tx, {
      labId,
      actorId: member.userId,
      event: 'hours.changed',
      subjectId: userId ?? rigId,
      data: { added: rrule, from, to },
    });
    return { id };
  });
}

export async function removeHours(
  { db, member }: ActionContext,
  input: z.output<typeof removeForm>,
) {
  return db.transaction(async (tx) => {
    const of = and(eq(workingHours.id, input.id), eq(workingHours.labId, member.labId));
    const [row] = await tx.select().from(workingHours).where(of).for('update');
    if (!row) throw notFound('row of hours');
    await tx.delete(workingHours).where(of);
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'hours.changed',
      subjectId: row.userId ?? row.rigId,
      data: { removed: row.rrule, from: row.from, to: row.to },
    });
    return { id: row.id };
  });
}

/** Adds a person's absence, or a closure of the whole lab. */
export async function addAbsence(
  { db, member }: ActionContext,
  input: z.output<typeof absenceForm>,
) {
  const { labId } = member;
  return db.transaction(async (tx) => {
    await assertOwn(tx, { labId, userId: input.userId, rigId: null });
    await tx
      .insert(absence)
      .ignore()
      .values({ ...input, labId, from: new Date(input.from), to: new Date(input.to) });
    await audit(tx, {
      labId,
      actorId: member.userId,
      event: 'absence.changed',
      subjectId: input.userId,
      data: { from: input.from, to: input.to, reason: input.reason },
    });
    return { id: input.id };
  });
}

export async function removeAbsence(
  { db, member }: ActionContext,
  input: z.output<typeof removeForm>,
) {
  return db.transaction(async (tx) => {
    const of = and(eq(absence.id, input.id), eq(absence.labId, member.labId));
    const [row] = await tx.select().from(absence).where(of).for('update');
    if (!row) throw notFound('absence');
    await tx.delete(absence).where(of);
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'absence.changed',
      subjectId: row.userId,
      data: { removed: true, from: row.from.toISOString(), to: row.to.toISOString() },
    });
    return { id: row.id };
  });
}
