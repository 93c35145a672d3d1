import { and, desc, eq, inArray, max } from 'drizzle-orm';
import type { Conn } from '../client';
import { predictedOnset, prediction } from '../schema';

export type RibbonPlace = 'steady' | 'undecided' | 'sustained';

/** The newest prediction's onsets of some studies, for placing doses on the ribbon in lists. */
export async function onsetsOfStudies(conn: Conn, of: { labId: string; studyIds: string[] }) {
  if (of.studyIds.length === 0) return [];
  const newest = await conn
    .select({ studyId: prediction.studyId, at: max(prediction.createdAt) })
    .from(prediction)
    .where(and(eq(prediction.labId, of.labId), inArray(prediction.studyId, of.studyIds)))
    .groupBy(prediction.studyId);
  const rows = await conn
    .select({
      studyId: prediction.studyId,
      at: prediction.createdAt,
      value: predictedOnset.value,
      low: predictedOnset.low,
      high: predictedOnset.high,
      oscillates: predictedOnset.oscillates,
    })
    .from(predictedOnset)
    .innerJoin(prediction, eq(prediction.id, predictedOnset.predictionId))
    .where(and(eq(prediction.labId, of.labId), inArray(prediction.studyId, of.studyIds)))
    .orderBy(desc(prediction.createdAt));
  const latest = new Map(newest.map((n) => [n.studyId, n.at?.getTime()]));
  return rows.filter((r) => latest.get(r.studyId) === r.at.getTime());
}

type Onset = {
  value: number;
  low: number | null;
  high: number | null;
  oscillates: 'above' | 'below';
};

/** Where a control value lies: inside a band nobody knows yet, else as the nearest onset says. */
export function placeOnRibbon(onsets: Onset[], control: number): RibbonPlace {
  if (onsets.some((o) => control >= (o.low ?? o.value) && control <= (o.high ?? o.value))) {
    return 'undecided';
  }
  const nearest = [...onsets].sort(
    (a, b) => Math.abs(a.value - control) - Math.abs(b.value - control),
  )[0];
  if (!nearest) return 'undecided';
  const beyond = nearest.oscillates === 'above' ? control > nearest.value : control < nearest.value;
  return beyond ? 'sustained' : 'steady';
}
