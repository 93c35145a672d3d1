import { eq } from 'drizzle-orm';
import type { Transaction } from '@/db/client';
import { lab } from '@/db/schema';

/**
 * One change of a lab's calendar at a time. Whatever changes runs or sessions takes this lock before
 * any other, so that a stop and a press at the bench wait for each other instead of failing.
 */
export async function lockCalendar(tx: Transaction, of: { labId: string }): Promise<void> {
  await tx.select({ id: lab.id }).from(lab).where(eq(lab.id, of.labId)).for('update');
}
