import { and, eq, sql } from 'drizzle-orm';
import type { Transaction } from '@/db/client';
import { type run, visit } from '@/db/schema';

type Run = typeof run.$inferSelect;

const lateBy = (r: Run, setAt: Date | null): number =>
  r.plannedStart && setAt ? setAt.getTime() - r.plannedStart.getTime() : 0;

/**
 * Every "hours since dose" counts from the setting: the windows of a run's visits follow it, and go
 * back to the plan when the setting is taken back.
 */
export async function shiftWindows(
  tx: Transaction,
  r: Run,
  setAt: Date | null,
  way: 'with it' | 'back' = 'with it',
): Promise<void> {
  const late = lateBy(r, setAt);
  if (late === 0) return;
  const microseconds = (way === 'back' ? -late : late) * 1000;
  await tx
    .update(visit)
    .set({
      earliest: sql`${visit.earliest} + interval ${microseconds} microsecond`,
      latest: sql`${visit.latest} + interval ${microseconds} microsecond`,
    })
    .where(and(eq(visit.runId, r.id), eq(visit.labId, r.labId)));
}

/** From when to when a run holds its rig: as planned, or as long from its setting. */
export function stayOf(r: Run, setAt: Date | null): { from?: Date; to?: Date } {
  if (!r.plannedStart || !r.plannedEnd) return setAt ? { from: setAt } : {};
  const late = lateBy(r, setAt);
  return {
    from: new Date(r.plannedStart.getTime() + late),
    to: new Date(r.plannedEnd.getTime() + late),
  };
}
