import { hash } from '@node-rs/argon2';
import { eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import type { z } from 'zod';
import { membership, user } from '@/db/schema';
import type { personForm } from '@/lib/contracts/forms/lab';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError } from '../errors';

/** Takes a person into the lab with a first password that they change themselves. */
export async function addPerson({ db, member }: ActionContext, input: z.output<typeof personForm>) {
  const passwordHash = await hash(input.password);
  return db.transaction(async (tx) => {
    const [known] = await tx.select({ id: user.id }).from(user).where(eq(user.email, input.email));
    if (known) {
      throw new AppError('conflict', 'Somebody signs in with this address already.', {
        at: 'email',
        mend: 'Use another address, or change the person that has it.',
      });
    }
    const userId = uuid();
    await tx
      .insert(user)
      .values({ id: userId, email: input.email, name: input.name, passwordHash });
    await tx.insert(membership).values({
      id: uuid(),
      labId: member.labId,
      userId,
      role: input.role,
      skills: input.skills,
    });
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'person.changed',
      subjectId: userId,
      data: { added: true, role: input.role },
    });
    return { userId };
  });
}
