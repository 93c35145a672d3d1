import { z } from 'zod';
import { finite, nonNegative, note, positive, side } from './common';

export const seriesOrder = z.enum(['ascending', 'descending', 'both', 'randomised']);
export type SeriesOrder = z.infer<typeof seriesOrder>;
export const levelPurpose = z.enum(['baseline', 'approach', 'onset', 'far side']);
export type LevelPurpose = z.infer<typeof levelPurpose>;

export const designLimits = z.strictObject({
  start: finite.optional(),
  ceiling: finite.optional(),
  smallestStep: nonNegative.optional(),
  largestStep: positive.optional(),
  grid: z.array(finite).min(1).max(100_000).optional(),
});

export const designRequest = z
  .strictObject({
    onset: z.union([
      z.strictObject({ values: z.array(finite).min(1) }),
      z.strictObject({ mean: finite, sd: nonNegative }),
    ]),
    oscillates: side.default('above'),
    range: z.tuple([finite, finite]),
    order: seriesOrder,
    levels: z.number().int().min(1).max(60),
    replicates: z.number().int().min(1).max(100),
    blur: nonNegative.default(0),
    doubt: nonNegative.default(0),
    limits: designLimits.optional(),
    anchors: z
      .strictObject({
        below: z.number().int().min(0).max(20).default(1),
        above: z.number().int().min(0).max(20).default(1),
      })
      .optional(),
    seed: z.number().int().min(0).default(1),
  })
  .refine((r) => r.range[0] < r.range[1], {
    message: 'the range runs from its lower to its higher end',
    path: ['range'],
  })
  .refine((r) => r.order !== 'randomised' || r.limits?.largestStep === undefined, {
    message: 'a largest step cannot be kept in random order: choose another order or drop the step',
    path: ['limits', 'largestStep'],
  });
export type DesignRequest = z.infer<typeof designRequest>;

export const designedLevel = z.strictObject({
  dose: finite,
  replicates: z.number().int(),
  position: z.number().int(),
  purpose: levelPurpose,
});
export type DesignedLevel = z.infer<typeof designedLevel>;

export const designAnswer = z.strictObject({
  levels: z.array(designedLevel),
  expected: z.strictObject({ sd: finite, low: finite, high: finite, equalSpacingSd: finite }),
  notes: z.array(note),
});
export type DesignAnswer = z.infer<typeof designAnswer>;
