import { v7 as uuid } from 'uuid';
import type { Conn } from '@/db/client';
import { auditEvent } from '@/db/schema';

/** The closed union of what the audit trail records. */
export const auditEvents = [
  'study.created',
  'study.changed',
  'system.version',
  'prediction.asked',
  'prediction.cancelled',
  'series.created',
  'series.changed',
  'series.submitted',
  'series.approved',
  'series.sent-back',
  'series.inherited',
  'sessions.laid-out',
  'session.moved',
  'session.assigned',
  'session.started',
  'session.step',
  'session.done',
  'session.cancelled',
  'dose.set',
  'stop.pressed',
  'stop.slipped',
  'stop.lifted',
  'preparation.lost',
  'readings.uploaded',
  'reading.entered',
  'verdict.computed',
  'verdict.overruled',
  'onset.estimated',
  'remark.written',
  'person.changed',
  'rig.changed',
  'hours.changed',
  'absence.changed',
  'outbox.refused',
] as const;
export type AuditEvent = (typeof auditEvents)[number];

/** Writes one row of the trail; call it inside the transaction of the change it records. */
export async function audit(
  tx: Conn,
  entry: {
    labId: string;
    actorId: string | null;
    event: AuditEvent;
    studyId?: string | null;
    subjectId?: string | null;
    data?: Record<string, unknown>;
  },
): Promise<void> {
  await tx.insert(auditEvent).values({
    id: uuid(),
    labId: entry.labId,
    actorId: entry.actorId,
    event: entry.event,
    studyId: entry.studyId ?? null,
    subjectId: entry.subjectId ?? null,
    data: entry.data ?? {},
  });
}
