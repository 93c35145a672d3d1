/** What a person is told when something cannot be done: what is wrong, where, how to mend it. */
export const problemCodes = [
  'not-signed-in',
  'forbidden',
  'not-found',
  'conflict',
  'too-large',
  'invalid-input',
  'not-possible',
  'too-many',
  'unavailable',
  'internal',
] as const;
export type ProblemCode = (typeof problemCodes)[number];
export type Problem = { code: ProblemCode; message: string; at?: string; mend?: string };
export type ActionResult<T> = { ok: true; value: T } | { ok: false; problem: Problem };
