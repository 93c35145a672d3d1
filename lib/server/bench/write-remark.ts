import { and, eq } from 'drizzle-orm';
import type { z } from 'zod';
import { booking, remark, session, study } from '@/db/schema';
import type { remarkForm } from '@/lib/contracts/forms/bench';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { notFound } from '../errors';

/** A note or a deviation, written down by whoever saw it; never changed afterwards. */
export async function writeRemark(
  { db, member }: ActionContext,
  input: z.output<typeof remarkForm>,
) {
  return db.transaction(async (tx) => {
    const [about] = await tx
      .select({ id: study.id })
      .from(study)
      .where(and(eq(study.id, input.studyId), eq(study.labId, member.labId)));
    if (!about) throw notFound('study');
    const [at] = input.sessionId
      ? await tx
          .select({ runId: booking.runId })
          .from(session)
          .innerJoin(booking, eq(booking.id, session.bookingId))
          .where(
            and(
              eq(session.id, input.sessionId),
              eq(session.labId, member.labId),
              eq(session.studyId, about.id),
            ),
          )
      : [];
    if (input.sessionId && !at) throw notFound('session');
    await tx
      .insert(remark)
      .ignore()
      .values({
        id: input.id,
        labId: member.labId,
        studyId: about.id,
        sessionId: input.sessionId,
        runId: at?.runId ?? null,
        kind: input.kind,
        text: input.text,
        byId: member.userId,
      });
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'remark.written',
      studyId: about.id,
      subjectId: input.id,
      data: { kind: input.kind },
    });
    return { id: input.id };
  });
}
