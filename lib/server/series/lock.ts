import { and, eq } from 'drizzle-orm';
import type { Transaction } from '@/db/client';
import { level, seriesVersion, study, user } from '@/db/schema';
import { AppError, notFound } from '../errors';
import type { Level, SeriesVersion, Study } from './types';

/**
 * Locks a version of this lab's study for a change and refuses one that was changed since it was
 * read, naming who changed it.
 */
export async function lockSeries(
  tx: Transaction,
  of: { labId: string; studyId: string; seriesVersionId: string; revision: number },
): Promise<{ study: Study; version: SeriesVersion; levels: Level[] }> {
  const [row] = await tx
    .select({ study, version: seriesVersion })
    .from(seriesVersion)
    .innerJoin(study, eq(study.id, seriesVersion.studyId))
    .where(
      and(
        eq(seriesVersion.id, of.seriesVersionId),
        eq(seriesVersion.studyId, of.studyId),
        eq(seriesVersion.labId, of.labId),
      ),
    )
    .for('update');
  if (!row) throw notFound('series version');
  if (row.version.revision !== of.revision) {
    const [by] = await tx
      .select({ name: user.name })
      .from(user)
      .where(eq(user.id, row.version.decidedBy ?? row.version.createdBy));
    throw new AppError(
      'conflict',
      `This version was changed meanwhile${by ? ` (last by ${by.name})` : ''}. Nothing was overwritten.`,
      { mend: 'Reload the page to see it as it is now, then decide again.' },
    );
  }
  const levels = await tx
    .select()
    .from(level)
    .where(and(eq(level.seriesVersionId, row.version.id), eq(level.labId, of.labId)))
    .orderBy(level.position);
  return { ...row, levels };
}
