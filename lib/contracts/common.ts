import { z } from 'zod';

/** A finite number; NaN and infinities are refused at the door. */
export const finite = z.number().finite();
export const positive = finite.positive();
export const nonNegative = finite.nonnegative();

const RESERVED = new Set([
  't',
  'pi',
  ...'exp log log10 sqrt sin cos tan sinh cosh tanh abs min max'.split(' '),
]);

/** A letter, then letters, digits, underscore; not `t`, not `pi`, no function's name. */
export const symbolName = z
  .string()
  .max(64)
  .regex(
    /^[A-Za-z][A-Za-z0-9_]*$/,
    'a symbol is a letter followed by letters, digits or underscores',
  )
  .refine((s) => !RESERVED.has(s), 'this name is reserved: t, pi and the names of functions');

/** A 90 % interval with its best value. */
export const interval = z.strictObject({ value: finite, low: finite, high: finite });
export type Interval = z.infer<typeof interval>;

/** Every remark that an engine answer may carry. One enumeration for all verbs. */
export const noteCode = z.enum([
  // predict, boundary
  'no-onset',
  'real-eigenvalue-crossing',
  'fold',
  'neutral-saddle',
  'left-physical-range',
  'branch-incomplete',
  'unstable-from-start',
  'oscillation-ends',
  'slow-settling',
  'draws-without-onset',
  'dose-unreachable',
  'cycles-incomplete',
  'onset-beyond-range',
  'relaxed-start',
  // design
  'fewer-levels',
  'limit-moved-level',
  'ceiling-below-onset',
  'approach-added',
  'anchor-unreachable',
  'smallest-step',
  'range-misses-onset',
  // cadence, replan
  'no-period',
  'interval-limited',
  'record-capped',
  'outside-envelope',
  // estimate
  'cannot-estimate',
  'perfect-separation',
  'inconsistent-verdicts',
  'prediction-overruled',
  'bound-only',
  'hysteresis',
  'few-levels',
  'evidence-missing',
]);
export const note = z.strictObject({ code: noteCode, text: z.string() });
export type Note = z.infer<typeof note>;

export const errorCode = z.enum([
  'invalid-request',
  'invalid-equation',
  'no-steady-state',
  'limit-exceeded',
  'internal',
]);
export type ErrorCode = z.infer<typeof errorCode>;
export const engineErrorShape = z.strictObject({
  error: z.strictObject({ code: errorCode, message: z.string(), at: z.string() }),
});

/** A request that cannot be answered. `at` is the dotted path of the field to mend. */
export class EngineError extends Error {
  constructor(
    readonly code: ErrorCode,
    message: string,
    readonly at: string = '',
  ) {
    super(message);
    this.name = 'EngineError';
  }
}

export const verdict = z.enum(['steady', 'damped', 'sustained', 'undecided']);
export type Verdict = z.infer<typeof verdict>;
export const side = z.enum(['above', 'below']);
export type Side = z.infer<typeof side>;
