import { and, eq, ne } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import type { z } from 'zod';
import { rig } from '@/db/schema';
import type { rigForm } from '@/lib/contracts/forms/lab';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError, notFound } from '../errors';

/** Adds a rig, or changes one; a retired rig keeps its history and takes no new runs. */
export async function saveRig({ db, member }: ActionContext, input: z.output<typeof rigForm>) {
  const { rigId, ...values } = input;
  return db.transaction(async (tx) => {
    const [same] = await tx
      .select({ id: rig.id })
      .from(rig)
      .where(
        and(
          eq(rig.labId, member.labId),
          eq(rig.name, input.name),
          rigId ? ne(rig.id, rigId) : undefined,
        ),
      );
    if (same) throw new AppError('conflict', 'Another rig has this name.', { at: 'name' });
    const id = rigId ?? uuid();
    if (rigId) {
      const of = and(eq(rig.id, rigId), eq(rig.labId, member.labId));
      const [row] = await tx.select({ id: rig.id }).from(rig).where(of).for('update');
      if (!row) throw notFound('rig');
      await tx.update(rig).set(values).where(of);
    } else {
      await tx.insert(rig).values({ id, labId: member.labId, ...values });
    }
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'rig.changed',
      subjectId: id,
      data: { name: input.name, added: rigId === null, retired: input.retired },
    });
    return { rigId: id };
  });
}
