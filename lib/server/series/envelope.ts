import { and, eq, inArray, isNotNull, isNull } from 'drizzle-orm';
import type { Conn } from '@/db/client';
import { preparation, run } from '@/db/schema';
import type { Envelope, Level, Scheme, Study } from './types';

/** The number of preparations that a series uses up. */
export function preparationsNeeded(scheme: Scheme, replicates: number, rows: number): number {
  return scheme === 'climb' ? replicates : replicates * rows;
}

/** Preparations that were worked with so far: a dose was set. */
export async function preparationsUsed(
  conn: Conn,
  of: { labId: string; studyId: string },
): Promise<string[]> {
  const rows = await conn
    .selectDistinct({ id: run.preparationId })
    .from(run)
    .where(and(eq(run.labId, of.labId), eq(run.studyId, of.studyId), isNotNull(run.setAt)));
  return rows.map((r) => r.id);
}

/**
 * Preparations of a study once this version has been worked through: those worked with so far, and
 * those that it adds. A climb goes on with the ones that live.
 */
export async function preparationsInAll(
  conn: Conn,
  of: { labId: string; studyId: string },
  series: { scheme: Scheme; replicates: number },
  rows: number,
): Promise<number> {
  const used = await preparationsUsed(conn, of);
  const needed = preparationsNeeded(series.scheme, series.replicates, rows);
  if (series.scheme !== 'climb' || used.length === 0) return used.length + needed;
  const living = await conn
    .select({ id: preparation.id })
    .from(preparation)
    .where(
      and(
        eq(preparation.labId, of.labId),
        inArray(preparation.id, used),
        isNull(preparation.endedAt),
      ),
    );
  return used.length + Math.max(0, needed - living.length);
}

/** What approving these levels allows: nothing beyond the doses, steps and numbers that were shown. */
export function envelopeOf(
  study: Pick<Study, 'ceilingDose' | 'largestStep' | 'approvalExpires'>,
  series: { scheme: Scheme; replicates: number },
  levels: Pick<Level, 'dose'>[],
): Envelope {
  const doses = levels.map((l) => l.dose);
  return {
    doseLow: Math.min(...doses),
    doseHigh: Math.max(...doses),
    ceilingDose: study.ceilingDose,
    largestStep: study.largestStep,
    preparations: preparationsNeeded(series.scheme, series.replicates, levels.length),
    lastDate: study.approvalExpires?.toISOString() ?? null,
  };
}
