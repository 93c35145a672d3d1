import type { Conn } from '@/db/client';
import { enqueue } from '../jobs/queue';
import { buildEvidence } from './build-evidence';

/**
 * Asks for verdicts and the observed onset anew; call it in the transaction that changed a reading
 * or a verdict. Null while there is nothing to judge or no prediction to compare with.
 */
export async function askEvidence(
  tx: Conn,
  of: { labId: string; studyId: string; askedBy: string },
): Promise<{ jobId: string } | null> {
  const plan = await buildEvidence(tx, of);
  if (!plan) return null;
  const { jobId } = await enqueue(tx, {
    labId: of.labId,
    studyId: of.studyId,
    askedBy: of.askedBy,
    kind: 'evidence',
    input: plan,
  });
  return { jobId };
}
