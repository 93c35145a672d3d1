import { and, eq, gte, inArray, or } from 'drizzle-orm';
import type { Transaction } from '@/db/client';
import { booking, type RunState, run, type SessionState, session } from '@/db/schema';

export type StopScope = {
  runs: { id: string; state: RunState }[];
  sessions: { id: string; state: SessionState; personId: string }[];
};

/**
 * What a stop holds: that preparation's runs, and every unstarted run of the study at this dose or
 * above; for animals and people the whole study.
 */
export async function stopScope(
  tx: Transaction,
  of: {
    labId: string;
    studyId: string;
    preparationId: string | null;
    dose: number | null;
    wholeStudy: boolean;
  },
): Promise<StopScope> {
  const unstarted: RunState[] = ['planned', 'tentative'];
  const open: RunState[] = [...unstarted, 'settling', 'recording'];
  const reach = of.wholeStudy
    ? inArray(run.state, open)
    : or(
        of.preparationId
          ? and(eq(run.preparationId, of.preparationId), inArray(run.state, open))
          : undefined,
        of.dose === null ? undefined : and(inArray(run.state, unstarted), gte(run.dose, of.dose)),
      );
  const runs = await tx
    .select({ id: run.id, state: run.state })
    .from(run)
    .where(and(eq(run.labId, of.labId), eq(run.studyId, of.studyId), reach))
    .for('update');
  if (runs.length === 0) return { runs, sessions: [] };
  const sessions = await tx
    .select({ id: session.id, state: session.state, personId: session.personId })
    .from(session)
    .innerJoin(booking, eq(booking.id, session.bookingId))
    .where(
      and(
        eq(session.labId, of.labId),
        inArray(
          booking.runId,
          runs.map((r) => r.id),
        ),
        inArray(session.state, ['planned', 'started']),
      ),
    )
    .for('update');
  return { runs, sessions };
}
