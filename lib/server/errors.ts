import { z } from 'zod';
import { EngineError, type Problem, type ProblemCode } from '@/lib/contracts';

/** One table from code to HTTP status. */
export const statusOf = {
  'not-signed-in': 401,
  forbidden: 403,
  'not-found': 404,
  conflict: 409,
  'too-large': 413,
  'invalid-input': 422,
  'not-possible': 422,
  'too-many': 429,
  unavailable: 503,
  internal: 500,
} as const satisfies Record<ProblemCode, number>;

export class AppError extends Error {
  constructor(
    readonly code: ProblemCode,
    readonly userMessage: string,
    readonly detail: { at?: string; mend?: string; internal?: string } = {},
  ) {
    super(detail.internal ?? userMessage);
    this.name = 'AppError';
  }
}

function zodProblem(error: z.ZodError): Problem {
  const first = error.issues[0];
  const more = error.issues.length - 1;
  const rest = more > 0 ? ` (and ${more} more)` : '';
  return {
    code: 'invalid-input',
    message: `${first?.message ?? 'The input is not valid'}${rest}`,
    at: first?.path.map(String).join('.') || undefined,
  };
}

/** Any thrown value as a problem; what is not meant for people is withheld. */
export function problemOf(error: unknown): Problem {
  if (error instanceof AppError) {
    const { at, mend } = error.detail;
    return { code: error.code, message: error.userMessage, at, mend };
  }
  if (error instanceof z.ZodError) return zodProblem(error);
  if (error instanceof EngineError) {
    const code = error.code === 'internal' ? 'internal' : 'not-possible';
    return { code, message: error.message, at: error.at || undefined };
  }
  const code = (error as { code?: string } | null)?.code;
  if (code === 'ECONNREFUSED' || code === 'PROTOCOL_CONNECTION_LOST' || code === 'ECONNRESET') {
    return {
      code: 'unavailable',
      message: 'The database cannot be reached just now. Nothing was saved.',
      mend: 'Wait a moment and press again.',
    };
  }
  return {
    code: 'internal',
    message: 'Something went wrong on our side. Nothing was saved.',
    mend: 'Try again; if it happens again, tell the lab head.',
  };
}

export const notFound = (what: string) =>
  new AppError('not-found', `There is no such ${what} in this lab.`);
