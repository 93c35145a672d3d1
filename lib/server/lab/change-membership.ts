import { and, eq, ne, sql } from 'drizzle-orm';
import type { z } from 'zod';
import { membership, user } from '@/db/schema';
import type { membershipForm } from '@/lib/contracts/forms/lab';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError, notFound } from '../errors';

/** Changes a person's role, skills and limits; whoever leaves is signed out everywhere. */
export async function changeMembership(
  { db, member }: ActionContext,
  input: z.output<typeof membershipForm>,
) {
  return db.transaction(async (tx) => {
    const of = and(eq(membership.labId, member.labId), eq(membership.userId, input.userId));
    const [row] = await tx.select().from(membership).where(of).for('update');
    if (!row) throw notFound('person');
    const staysHead = input.active && input.role === 'head';
    if (row.role === 'head' && !staysHead) {
      const others = await tx
        .select({ id: membership.id })
        .from(membership)
        .where(
          and(
            eq(membership.labId, member.labId),
            eq(membership.role, 'head'),
            eq(membership.active, true),
            ne(membership.userId, input.userId),
          ),
        );
      if (others.length === 0) {
        throw new AppError('not-possible', 'This is the lab’s only head.', {
          at: 'role',
          mend: 'Make somebody else head first.',
        });
      }
    }
    const { userId, ...values } = input;
    await tx.update(membership).set(values).where(of);
    if (!input.active) {
      await tx
        .update(user)
        .set({ sessionVersion: sql`${user.sessionVersion} + 1` })
        .where(eq(user.id, userId));
    }
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'person.changed',
      subjectId: userId,
      data: { role: input.role, active: input.active, before: row.role },
    });
    return { userId };
  });
}
