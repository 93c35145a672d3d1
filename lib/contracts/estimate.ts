import { z } from 'zod';
import { finite, interval, nonNegative, note, side, verdict } from './common';
import { record } from './judge';

export const estimateLevel = z.strictObject({
  control: finite,
  controlSd: nonNegative.optional(),
  preparation: z.string().max(200).optional(),
  direction: z.enum(['up', 'down']).optional(),
  verdict: verdict.optional(),
  amplitude: interval.optional(),
  growthRate: interval.optional(),
  record: record.optional(),
});
export type EstimateLevel = z.infer<typeof estimateLevel>;

export const estimateRequest = z.strictObject({
  levels: z.array(estimateLevel).max(5000),
  predicted: z
    .union([
      z.strictObject({ values: z.array(finite).min(1) }),
      z.strictObject({ mean: finite, sd: nonNegative }),
    ])
    .optional(),
  oscillates: side.optional(),
});
export type EstimateRequest = z.infer<typeof estimateRequest>;

export const methodName = z.enum([
  'bracket',
  'threshold',
  'amplitude law',
  'decay rate',
  'combined',
]);
export const observedOnset = z.strictObject({
  onset: interval,
  oscillates: side,
  methods: z.array(
    z.strictObject({
      name: methodName,
      onset: interval.nullable(),
      used: z.boolean(),
      why: z.string(),
    }),
  ),
  byPreparation: z.array(z.strictObject({ preparation: z.string(), onset: interval })),
  hysteresis: z.strictObject({ up: interval, down: interval }).nullable(),
  agreement: z
    .strictObject({
      difference: finite,
      normalisedError: finite,
      verdict: z.enum(['agrees', 'differs', 'cannot tell']),
    })
    .nullable(),
  updated: z.strictObject({ values: z.array(finite) }).nullable(),
});
export type ObservedOnset = z.infer<typeof observedOnset>;

export const estimateAnswer = z.strictObject({
  onsets: z.array(observedOnset),
  notes: z.array(note),
});
export type EstimateAnswer = z.infer<typeof estimateAnswer>;
