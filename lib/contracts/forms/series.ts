import { z } from 'zod';
import { finite, positive } from '../common';
import { seriesOrder } from '../design';

export const scheme = z.enum(['climb', 'fresh', 'parallel']);
const id = z.uuid();

/** What the Series page asks for. Doses in bench units. */
export const designForm = z
  .strictObject({
    studyId: id,
    predictionId: id,
    /** Ordinals of the predicted onsets to look for. */
    onsets: z.array(z.number().int().min(0)).min(1, 'choose at least one onset').max(4),
    scheme,
    order: seriesOrder,
    levels: z
      .number()
      .int('give a whole number of levels')
      .min(1, 'at least one level')
      .max(30, 'at most 30 levels an onset'),
    replicates: z
      .number()
      .int('give a whole number of preparations')
      .min(1, 'at least one preparation')
      .max(24, 'at most 24 preparations'),
    /** How far the model itself may be off, as a factor: 2 means half to double. */
    doubtFactor: z.number().min(1, 'a factor of at least 1').max(10, 'a factor of at most 10'),
    settleCapMinutes: positive.optional(),
    recordCapMinutes: positive.optional(),
    reason: z.string().trim().max(300).default(''),
  })
  .refine((f) => f.scheme !== 'parallel' || f.order === 'randomised', {
    message: 'in a parallel series all levels run at once: choose the randomised order',
    path: ['order'],
  })
  .refine((f) => f.scheme !== 'climb' || f.order !== 'randomised', {
    message: 'a climb takes one preparation from level to level: choose a rising or falling order',
    path: ['order'],
  });
export type DesignForm = z.output<typeof designForm>;

export const levelsForm = z.strictObject({
  studyId: id,
  seriesVersionId: id,
  revision: z.number().int(),
  levels: z
    .array(
      z.strictObject({
        dose: finite,
        purpose: z.enum(['baseline', 'approach', 'onset', 'far side']),
        locked: z.boolean(),
      }),
    )
    .min(1, 'a series needs at least one level')
    .max(100),
});

export const seriesRef = z.strictObject({
  studyId: id,
  seriesVersionId: id,
  revision: z.number().int(),
});
export const decisionForm = z.strictObject({
  studyId: id,
  seriesVersionId: id,
  revision: z.number().int(),
  decision: z.enum(['approve', 'send back']),
  words: z.string().trim().max(1000),
});

export const layOutForm = z.strictObject({
  studyId: id,
  seriesVersionId: id,
  revision: z.number().int(),
  notBefore: z.iso.datetime({ offset: true }),
  notAfter: z.iso.datetime({ offset: true }),
});

export const moveForm = z.strictObject({
  sessionId: id,
  revision: z.number().int(),
  startsAt: z.iso.datetime({ offset: true }),
  personId: id.optional(),
});
