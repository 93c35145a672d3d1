'use server';

import { z } from 'zod';
import { labAction } from '@/lib/server/action';
import { audit } from '@/lib/server/audit';
import { AppError } from '@/lib/server/errors';
import { cancel } from '@/lib/server/jobs/queue';

/** Ends a calculation that waits or runs; what it would have stored is not stored. */
export const cancelJob = labAction({
  action: 'predict',
  input: z.strictObject({ jobId: z.uuid() }),
  handle: async ({ db, member, now }, { jobId }) =>
    db.transaction(async (tx) => {
      const cancelled = await cancel(tx, { labId: member.labId, jobId, now });
      if (!cancelled) {
        throw new AppError('conflict', 'This calculation has already ended.', {
          mend: 'Reload the page to see its result.',
        });
      }
      await audit(tx, {
        labId: member.labId,
        actorId: member.userId,
        event: 'prediction.cancelled',
        subjectId: jobId,
      });
      return { jobId };
    }),
});
