import type { z } from 'zod';
import type { Conn } from '@/db/client';
import type { ActionResult } from '@/lib/contracts';
import { type Action, type Allowance, demand } from './authorise';
import { database } from './database';
import { problemOf } from './errors';
import { log } from './log';
import { type Member, requireMember } from './member';
import { retryDeadlock } from './retry-deadlock';

export type ActionContext = {
  db: Conn;
  member: Member;
  allowance: Exclude<Allowance, 'no'>;
  now: Date;
};

/**
 * The one way to write: session → role → zod → `handle` (which does its change, audit row and outbox
 * row in one transaction) → an answer that is either the value or a problem, never a thrown error.
 */
export function labAction<S extends z.ZodType, T>(options: {
  action: Action;
  input: S;
  handle: (context: ActionContext, input: z.output<S>) => Promise<T>;
}): (raw: z.input<S>) => Promise<ActionResult<T>> {
  return async (raw) => {
    try {
      const member = await requireMember();
      const allowance = demand(member.role, options.action);
      const input = options.input.parse(raw);
      const context = { db: database(), member, allowance, now: new Date() };
      return { ok: true, value: await retryDeadlock(() => options.handle(context, input)) };
    } catch (error) {
      const problem = problemOf(error);
      if (problem.code === 'internal') log.error({ err: error, action: options.action }, 'action');
      return { ok: false, problem };
    }
  };
}
