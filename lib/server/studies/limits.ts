import { DateTime } from 'luxon';
import type { Conn } from '@/db/client';
import { usableRigs } from '@/db/queries/studies';
import { type CreateStudyInput, needsApproval } from '@/lib/contracts/forms/study';
import type { ActionContext } from '../action';
import { AppError } from '../errors';

type Limits = Pick<
  CreateStudyInput,
  'perturbs' | 'rigId' | 'approvalReference' | 'approvalExpires'
>;

/**
 * The end of the approval's last day in the lab's zone, or null. Throws where an animal's or
 * volunteer's study has no approval, or one that has already expired: the form asks the same, but
 * only this refusal counts.
 */
export function approvalEnd(
  { member, now }: Pick<ActionContext, 'member' | 'now'>,
  { perturbs, approvalReference, approvalExpires }: Limits,
): Date | null {
  const needed = needsApproval(perturbs);
  if (needed && !approvalReference) {
    throw new AppError('invalid-input', 'This study needs the reference of its approval.', {
      at: 'approvalReference',
      mend: 'Write the reference as it stands on the approval.',
    });
  }
  if (needed && !approvalExpires) {
    throw new AppError('invalid-input', 'This study needs the day its approval expires.', {
      at: 'approvalExpires',
      mend: 'Write the last day on which the approval holds.',
    });
  }
  if (!approvalExpires) return null;
  const end = DateTime.fromISO(approvalExpires, { zone: member.lab.timeZone }).endOf('day');
  if (!end.isValid || end.toJSDate() < now) {
    throw new AppError('invalid-input', `The approval expired on ${approvalExpires}.`, {
      at: 'approvalExpires',
      mend: 'Renew the approval first, then write its new last day.',
    });
  }
  return end.toJSDate();
}

/** Throws unless the rig is one of this lab's that can still be used. */
export async function demandRig(
  conn: Conn,
  { labId, rigId }: { labId: string; rigId: string | null },
): Promise<void> {
  if (!rigId) return;
  const rigs = await usableRigs(conn, { labId });
  if (rigs.some((rig) => rig.id === rigId)) return;
  throw new AppError('invalid-input', 'There is no such rig in this lab.', {
    at: 'rigId',
    mend: 'Choose a rig from the list, or have the head add one.',
  });
}
