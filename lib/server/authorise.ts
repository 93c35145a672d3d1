import type { Role } from '@/db/schema';
import { AppError } from './errors';

/** Everything that can be done, one entry a row of the lab's rules. */
export const actions = [
  'see',
  'write system',
  'predict',
  'write series',
  'approve series',
  'lift stop',
  'stop',
  'lay out',
  'move session',
  'record session',
  'upload readings',
  'report lost',
  'overrule verdict',
  'manage people',
  'manage rigs',
  'manage hours',
  'see audit',
] as const;
export type Action = (typeof actions)[number];

/** `own`: only one's own visits, and only between their earliest and latest times. */
export type Allowance = 'yes' | 'own' | 'no';

const all = { head: 'yes', investigator: 'yes', technician: 'yes', observer: 'yes' } as const;
const planners = { head: 'yes', investigator: 'yes', technician: 'no', observer: 'no' } as const;
const bench = { head: 'yes', investigator: 'yes', technician: 'yes', observer: 'no' } as const;
const headOnly = { head: 'yes', investigator: 'no', technician: 'no', observer: 'no' } as const;

const table: Record<Action, Record<Role, Allowance>> = {
  see: all,
  'write system': planners,
  predict: planners,
  'write series': planners,
  'approve series': headOnly,
  'lift stop': headOnly,
  stop: all,
  'lay out': planners,
  'move session': { ...planners, technician: 'own' },
  'record session': bench,
  'upload readings': bench,
  'report lost': bench,
  'overrule verdict': planners,
  'manage people': headOnly,
  'manage rigs': headOnly,
  'manage hours': headOnly,
  'see audit': headOnly,
};

/** What `role` may do. Every page, action and route asks here and nowhere else. */
export function authorise(role: Role, action: Action): Allowance {
  return table[action][role];
}

export function rolesThatMay(action: Action): Role[] {
  return (Object.keys(table[action]) as Role[]).filter((role) => table[action][role] !== 'no');
}

/** Throws `forbidden`, naming who can; returns the allowance otherwise. */
export function demand(role: Role, action: Action): Exclude<Allowance, 'no'> {
  const allowance = authorise(role, action);
  if (allowance === 'no') {
    throw new AppError('forbidden', `As ${role} you cannot do this: ${action}.`, {
      mend: `Ask the ${rolesThatMay(action).join(' or the ')}.`,
    });
  }
  return allowance;
}
