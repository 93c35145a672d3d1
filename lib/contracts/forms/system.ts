import { z } from 'zod';
import { control, systemModel } from '../model';

export const saveSystemInput = z.strictObject({
  /** Made by the form, so that a second press names the same version. */
  id: z.uuid(),
  studyId: z.uuid(),
  /** Number of the version that the form was filled from; a newer one is a conflict. */
  basedOn: z.number().int().positive(),
  model: systemModel,
  control,
  reason: z
    .string()
    .trim()
    .min(1, 'Say what changed and why')
    .max(300, 'Use at most 300 characters'),
});
export type SaveSystemInput = z.output<typeof saveSystemInput>;

/** One thing to mend; `at` is the dotted path below the form, such as `model.equations.x`. */
export type FieldProblem = { at: string; message: string };

/** Either the new version, or everything that has to be mended first. */
export type SaveSystemResult =
  | { outcome: 'saved'; number: number }
  | { outcome: 'to mend'; problems: FieldProblem[] };
