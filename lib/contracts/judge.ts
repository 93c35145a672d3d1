import { z } from 'zod';
import { finite, interval, positive, verdict } from './common';

export const expectedPeriod = z
  .strictObject({ low: positive, high: positive })
  .refine((p) => p.low <= p.high, { message: 'low must not exceed high', path: ['low'] });

const recordFields = {
  times: z.array(finite).max(5_000_000),
  values: z.array(finite.nullable()).max(5_000_000),
  noiseSd: finite.nonnegative().optional(),
  expectedPeriod: expectedPeriod.optional(),
  from: finite.optional(),
  until: finite.optional(),
};

/** One run's record: readings of one readout against time since its level was set. */
export const record = z.strictObject(recordFields).superRefine((r, ctx) => {
  if (r.times.length !== r.values.length) {
    ctx.addIssue({
      code: 'custom',
      message: `there are ${r.times.length} times and ${r.values.length} values`,
      path: ['values'],
    });
  }
});
export type RunRecord = z.infer<typeof record>;

export const judgeRequest = record;
export type JudgeRequest = RunRecord;

export const judgeAnswer = z.strictObject({
  verdict,
  period: interval.nullable(),
  amplitude: interval.nullable(),
  growthRate: interval.nullable(),
  falseAlarm: finite.nullable(),
  cyclesCovered: finite,
  samplesPerCycle: finite,
  reasons: z.array(z.string()),
});
export type JudgeAnswer = z.infer<typeof judgeAnswer>;
