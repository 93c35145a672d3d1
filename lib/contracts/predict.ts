import { z } from 'zod';
import { finite, note, side } from './common';
import { control, systemModel } from './model';

export const predictRequest = z.strictObject({
  model: systemModel,
  control,
  draws: z.number().int().min(0).max(100_000).default(400),
  seed: z.number().int().min(0).default(1),
  cycles: z.boolean().default(true),
});
export type PredictRequest = z.infer<typeof predictRequest>;

export const onsetSpread = z.strictObject({
  draws: z.number().int(),
  median: finite,
  low: finite,
  high: finite,
  none: finite,
  values: z.array(finite),
  doses: z.array(finite.nullable()),
});
export type OnsetSpread = z.infer<typeof onsetSpread>;

export const predictedOnset = z.strictObject({
  value: finite,
  period: finite,
  criticality: z.enum(['supercritical', 'subcritical', 'degenerate']),
  lyapunov: finite,
  oscillates: side,
  growthSlope: finite,
  coexistence: z.strictObject({ from: finite, to: finite }).nullable(),
  steadyState: z.record(z.string(), finite),
  dose: finite.nullable(),
  spread: onsetSpread.nullable(),
});
export type PredictedOnset = z.infer<typeof predictedOnset>;

export const branch = z.strictObject({
  control: z.array(finite),
  growthRate: z.array(finite),
  frequency: z.array(finite),
  stable: z.array(z.boolean()),
  steadyState: z.record(z.string(), z.array(finite)),
});
export type Branch = z.infer<typeof branch>;

export const cycle = z.strictObject({
  control: finite,
  period: finite,
  stable: z.boolean(),
  readouts: z.record(z.string(), z.strictObject({ min: finite, max: finite })),
});
export type Cycle = z.infer<typeof cycle>;

export const predictAnswer = z.strictObject({
  onsets: z.array(predictedOnset),
  branch,
  cycles: z.array(cycle),
  notes: z.array(note),
});
export type PredictAnswer = z.infer<typeof predictAnswer>;

export const boundaryRequest = z.strictObject({
  model: systemModel,
  control,
  second: z.strictObject({ symbol: z.string(), from: finite, to: finite }),
  points: z.number().int().min(2).max(20_000).default(200),
});
export type BoundaryRequest = z.infer<typeof boundaryRequest>;
export const boundaryAnswer = z.strictObject({
  curves: z.array(
    z.strictObject({
      control: z.array(finite),
      second: z.array(finite),
      period: z.array(finite),
    }),
  ),
});
export type BoundaryAnswer = z.infer<typeof boundaryAnswer>;

export const simulateRequest = z.strictObject({
  model: systemModel,
  set: z.record(z.string(), finite),
  until: finite.positive(),
  every: finite.positive(),
  noise: z.boolean().default(false),
  seed: z.number().int().min(0).default(1),
  from: z.record(z.string(), finite).optional(),
});
export type SimulateRequest = z.infer<typeof simulateRequest>;
export const simulateAnswer = z.strictObject({
  times: z.array(finite),
  readouts: z.record(z.string(), z.array(finite)),
});
export type SimulateAnswer = z.infer<typeof simulateAnswer>;
