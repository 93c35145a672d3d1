import { z } from 'zod';

export const perturbedKinds = [
  'chemical reaction',
  'micro-organisms',
  'cells or tissue',
  'animal',
  'human volunteer',
  'device',
] as const;
export const perturbedKind = z.enum(perturbedKinds, 'Choose what is perturbed');
export type PerturbedKind = z.infer<typeof perturbedKind>;

/** Animals and volunteers: nothing may be planned without an approval on paper. */
export const needsApproval = (kind: PerturbedKind): boolean =>
  kind === 'animal' || kind === 'human volunteer';

const words = (most: number, missing: string) =>
  z.string().trim().min(1, missing).max(most, `Use at most ${most} characters`);

const isoDate = z.iso.date('Write the date as year-month-day');

/** What a study says about itself beside its system; doses are in `doseUnit`. */
const limitFields = {
  title: words(200, 'Give the study a title'),
  summary: z.string().trim().max(500, 'Use at most 500 characters').default(''),
  perturbs: perturbedKind,
  rigId: z.uuid('Choose one of the lab’s rigs').nullable(),
  doseLabel: words(80, 'Say what is set at the bench'),
  doseUnit: words(40, 'Give the unit of the dose'),
  ceilingDose: z.number('Give the highest dose that may ever be set').finite(),
  largestStep: z
    .number('Give the largest step between two doses')
    .finite()
    .positive('The largest step must be above 0'),
  stopRules: words(5000, 'Say in words when a run is stopped'),
  approvalReference: z.string().trim().max(120, 'Use at most 120 characters').nullable(),
  approvalExpires: isoDate.nullable(),
};

type Limits = {
  perturbs: PerturbedKind;
  approvalReference: string | null;
  approvalExpires: string | null;
};

function demandApproval(value: Limits, ctx: z.RefinementCtx) {
  if (needsApproval(value.perturbs)) {
    const whose = value.perturbs === 'animal' ? 'animals' : 'volunteers';
    if (!value.approvalReference) {
      ctx.addIssue({
        code: 'custom',
        path: ['approvalReference'],
        message: `A study on ${whose} needs the reference of its approval`,
      });
    }
    if (!value.approvalExpires) {
      ctx.addIssue({
        code: 'custom',
        path: ['approvalExpires'],
        message: `A study on ${whose} needs the day on which its approval expires`,
      });
    }
  } else if (value.approvalExpires && !value.approvalReference) {
    ctx.addIssue({
      code: 'custom',
      path: ['approvalReference'],
      message: 'Give the reference of the approval that expires on this day, or clear the day',
    });
  }
}

export const createStudyInput = z
  .strictObject({
    /** Made by the form, so that a second press names the same study. */
    id: z.uuid(),
    from: z.discriminatedUnion('kind', [
      z.strictObject({ kind: z.literal('library'), modelId: z.string().min(1).max(80) }),
      z.strictObject({ kind: z.literal('study'), studyId: z.uuid() }),
    ]),
    ...limitFields,
  })
  .superRefine(demandApproval);
export type CreateStudyInput = z.output<typeof createStudyInput>;

export const changeStudyInput = z
  .strictObject({
    studyId: z.uuid(),
    ...limitFields,
    reason: words(300, 'Say why this changes'),
  })
  .superRefine(demandApproval);
export type ChangeStudyInput = z.output<typeof changeStudyInput>;

export const askPredictionInput = z.strictObject({
  studyId: z.uuid(),
  /** The system version that was on the screen. */
  systemNumber: z.number().int().positive(),
  draws: z
    .number('Give a number of draws')
    .int('Give a whole number of draws')
    .min(20, 'Fewer than 20 draws give no band; use 20 or more')
    .max(5000, 'Use at most 5000 draws'),
  seed: z
    .number('Give a seed')
    .int('The seed is a whole number')
    .min(0, 'The seed is 0 or more')
    .max(2147483647, 'The seed is at most 2147483647'),
});
export type AskPredictionInput = z.output<typeof askPredictionInput>;
