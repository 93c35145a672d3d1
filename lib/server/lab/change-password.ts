import { hash, verify } from '@node-rs/argon2';
import { eq, sql } from 'drizzle-orm';
import type { z } from 'zod';
import { user } from '@/db/schema';
import type { passwordForm } from '@/lib/contracts/forms/lab';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError } from '../errors';
import { limitAttempts } from '../rate-limit';

/** Changes one's own password and ends every session of it, this one included. */
export async function changePassword(
  { db, member }: ActionContext,
  input: z.output<typeof passwordForm>,
) {
  if (!(await limitAttempts(db, `password:${member.userId}`, 10, 15 * 60_000))) {
    throw new AppError('too-many', 'Too many attempts.', { mend: 'Wait 15 minutes.' });
  }
  const [row] = await db.select().from(user).where(eq(user.id, member.userId));
  if (!row || !(await verify(row.passwordHash, input.current))) {
    throw new AppError('invalid-input', 'This is not the password you have now.', {
      at: 'current',
    });
  }
  const passwordHash = await hash(input.next);
  await db.transaction(async (tx) => {
    await tx
      .update(user)
      .set({ passwordHash, sessionVersion: sql`${user.sessionVersion} + 1` })
      .where(eq(user.id, member.userId));
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'person.changed',
      subjectId: member.userId,
      data: { password: true },
    });
  });
  return { userId: member.userId };
}
