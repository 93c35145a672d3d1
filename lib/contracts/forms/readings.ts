import { z } from 'zod';
import { verdict } from '../common';

const id = z.uuid();

/** Another verdict than the one that stands, with the reason; the computed one stays visible. */
export const overruleForm = z.strictObject({
  studyId: id,
  runId: id,
  /** The verdict that stood when the form was shown, so that two people at once are told. */
  seenVerdictId: id.nullable(),
  verdict,
  reason: z
    .string()
    .trim()
    .min(3, 'say why, so that others can follow it')
    .max(1000, 'at most 1000 characters'),
});
export type OverruleForm = z.output<typeof overruleForm>;

/** Levels wanted after the evidence so far; scheme, order and preparations are the approved ones. */
export const replanForm = z.strictObject({
  studyId: id,
  levels: z
    .number({ error: 'give a number of levels' })
    .int('give a whole number of levels')
    .min(1, 'at least one level')
    .max(12, 'at most 12 levels an onset'),
});
export type ReplanForm = z.output<typeof replanForm>;
