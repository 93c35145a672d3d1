import type { Conn } from '@/db/client';
import { approvedVersion } from '@/db/queries/series';
import { withinEnvelope } from '@/lib/planner/replan/within-envelope';
import { needsReference } from './approvable';
import { preparationsInAll, preparationsNeeded } from './envelope';
import type { Level, SeriesVersion, Study } from './types';

/**
 * The approved version whose envelope covers these levels, or null when the head has to decide. An
 * envelope covers doses, steps, number of preparations and last date, as they were approved.
 */
export async function coveringApproval(
  conn: Conn,
  about: Study,
  version: SeriesVersion,
  levels: Level[],
): Promise<SeriesVersion | null> {
  const approved = await approvedVersion(conn, { labId: about.labId, studyId: about.id });
  const envelope = approved?.envelope;
  if (!approved || !envelope || approved.id === version.id) return null;
  const stepped = version.scheme === 'climb';
  const fits = withinEnvelope(
    levels,
    {
      doseLow: envelope.doseLow,
      doseHigh: envelope.doseHigh,
      ceiling: envelope.ceilingDose,
      largestStep: envelope.largestStep,
    },
    undefined,
    stepped,
  );
  const of = { labId: about.labId, studyId: about.id };
  // Where life is concerned the number approved is of all, not of one version.
  const needed = needsReference(about.perturbs)
    ? await preparationsInAll(conn, of, version, levels.length)
    : preparationsNeeded(version.scheme, version.replicates, levels.length);
  const sameDate = (about.approvalExpires?.toISOString() ?? null) === envelope.lastDate;
  const sameScheme = version.scheme === approved.scheme;
  return fits.ok && needed <= envelope.preparations && sameDate && sameScheme ? approved : null;
}
