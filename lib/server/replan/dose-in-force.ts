import { and, desc, eq, isNotNull } from 'drizzle-orm';
import type { Conn } from '@/db/client';
import { preparation, run } from '@/db/schema';
import type { Scheme } from '../series/types';

type Of = {
  labId: string;
  studyId: string;
  scheme: Scheme;
  replicates: number;
  /** Dose of the approved series' first row: where a preparation begins that has had none yet. */
  firstDose: number;
};

/**
 * The dose from which the next rise is counted. A climb: the lowest of the doses that the
 * preparations it goes on with stand at now. Fresh preparations: the highest dose that any was given,
 * beyond which the series has not been.
 */
export async function doseInForce(conn: Conn, of: Of): Promise<number> {
  const settings = await conn
    .select({ preparationId: run.preparationId, delivered: run.deliveredDose, dose: run.dose })
    .from(run)
    .where(and(eq(run.labId, of.labId), eq(run.studyId, of.studyId), isNotNull(run.setAt)))
    .orderBy(desc(run.setAt));
  const given = settings.map((s) => ({ ...s, dose: s.delivered ?? s.dose }));
  if (of.scheme !== 'climb') {
    return given.length > 0 ? Math.max(...given.map((g) => g.dose)) : of.firstDose;
  }
  // The same order as the lay-out's, which goes on with the first of them.
  const live = await conn
    .select({ id: preparation.id, endedAt: preparation.endedAt })
    .from(preparation)
    .where(and(eq(preparation.labId, of.labId), eq(preparation.studyId, of.studyId)))
    .orderBy(preparation.createdAt, preparation.code);
  const carriers = live.filter((p) => p.endedAt === null).slice(0, of.replicates);
  const doses = carriers.map(
    (p) => given.find((g) => g.preparationId === p.id)?.dose ?? of.firstDose,
  );
  if (carriers.length < of.replicates) doses.push(of.firstDose);
  return Math.min(...doses);
}
