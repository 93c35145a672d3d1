import { eq, sql } from 'drizzle-orm';
import type { z } from 'zod';
import { session } from '@/db/schema';
import type { startForm } from '@/lib/contracts/forms/bench';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError } from '../errors';
import { lockSession } from '../sessions/lock-session';
import { assertAdvance } from '../states';
import { pressTime } from './press-time';

/** One press to start; pressing twice starts once. */
export async function startSession(
  { db, member, now }: ActionContext,
  input: z.output<typeof startForm>,
) {
  return db.transaction(async (tx) => {
    const { session: s, study } = await lockSession(tx, { labId: member.labId, ...input });
    if (s.state === 'started') return { sessionId: s.id };
    if (s.state === 'suspended') {
      throw new AppError('conflict', 'A stop holds this session.', {
        mend: 'Only the lab head lifts it. Set nothing until then.',
      });
    }
    assertAdvance('session', s.state, 'started');
    const at = pressTime(input.at, now);
    await tx
      .update(session)
      .set({
        state: 'started',
        startedAt: at,
        revision: sql`${session.revision} + 1`,
        changedBy: member.userId,
        changedAt: now,
      })
      .where(eq(session.id, s.id));
    await audit(tx, {
      labId: member.labId,
      actorId: member.userId,
      event: 'session.started',
      studyId: study.id,
      subjectId: s.id,
      data: { at: at.toISOString() },
    });
    return { sessionId: s.id };
  });
}
