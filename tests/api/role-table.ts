import type { Role } from '@/db/schema';

type Row = Record<Role, 'yes' | 'own' | 'no'>;
const row = (
  head: Row['head'],
  investigator: Row['head'],
  technician: Row['head'],
  observer: Row['head'],
): Row => ({ head, investigator, technician, observer });

/**
 * The lab's rules as they are written down, copied by hand: who may do what. 'own': one's own visits,
 * between their earliest and latest times.
 */
export const roleTable = {
  // See studies, calendar, readings, reports.
  see: row('yes', 'yes', 'yes', 'yes'),
  // Write systems, predictions, series.
  'write system': row('yes', 'yes', 'no', 'no'),
  predict: row('yes', 'yes', 'no', 'no'),
  'write series': row('yes', 'yes', 'no', 'no'),
  // Approve a series, lift a stop.
  'approve series': row('yes', 'no', 'no', 'no'),
  'lift stop': row('yes', 'no', 'no', 'no'),
  // Stop: anybody may.
  stop: row('yes', 'yes', 'yes', 'yes'),
  // Lay out, move, assign sessions.
  'lay out': row('yes', 'yes', 'no', 'no'),
  'move session': row('yes', 'yes', 'own', 'no'),
  // Record a session, upload readings, report a lost preparation.
  'record session': row('yes', 'yes', 'yes', 'no'),
  'upload readings': row('yes', 'yes', 'yes', 'no'),
  'report lost': row('yes', 'yes', 'yes', 'no'),
  // Overrule a verdict.
  'overrule verdict': row('yes', 'yes', 'no', 'no'),
  // People, rigs, hours, audit.
  'manage people': row('yes', 'no', 'no', 'no'),
  'manage rigs': row('yes', 'no', 'no', 'no'),
  'manage hours': row('yes', 'no', 'no', 'no'),
  'see audit': row('yes', 'no', 'no', 'no'),
} satisfies Record<string, Row>;

export type Rule = keyof typeof roleTable;
