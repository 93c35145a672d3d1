import { z } from 'zod';
import { finite } from '../common';

const id = z.uuid();
/** Device time of the press; kept beside the server's. */
const at = z.iso.datetime({ offset: true });

export const startForm = z.strictObject({ sessionId: id, at });

export const visitForm = z
  .strictObject({
    sessionId: id,
    visitId: id,
    at,
    outcome: z.enum(['done', 'late', 'skipped']),
    remark: z.string().trim().max(500).default(''),
    /** The dose as read back, on the visit that sets it. */
    dose: finite.nullable().default(null),
    values: z
      .array(z.strictObject({ readout: z.string().max(64), value: finite }))
      .max(20)
      .default([]),
  })
  .refine((f) => f.outcome !== 'skipped' || f.remark !== '', {
    message: 'say why it was skipped',
    path: ['remark'],
  });
export const undoForm = z.strictObject({ sessionId: id, visitId: id });

export const remarkForm = z.strictObject({
  id,
  studyId: id,
  sessionId: id.nullable(),
  kind: z.enum(['note', 'deviation']),
  text: z.string().trim().min(1, 'write what you saw').max(5000),
});

export const lostForm = z.strictObject({
  sessionId: id,
  at,
  reason: z.string().trim().min(1, 'say what happened').max(300),
});
