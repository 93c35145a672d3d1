import { sql } from 'drizzle-orm';
import {
  bigint,
  double,
  index,
  int,
  mysqlTable,
  text,
  uniqueIndex,
  varchar,
} from 'drizzle-orm/mysql-core';
import { createdAt, id, instant, primaryId, shape } from './columns';
import { lab, user } from './lab';

export const jobStates = ['queued', 'running', 'done', 'failed', 'cancelled'] as const;
export type JobState = (typeof jobStates)[number];
export type JobKind = 'predict' | 'design' | 'lay-out' | 'evidence';

export const job = mysqlTable(
  'job',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    studyId: id('study_id').notNull(),
    kind: varchar('kind', { length: 20 }).$type<JobKind>().notNull(),
    input: shape<Record<string, unknown>>('input').notNull(),
    inputHash: varchar('input_hash', { length: 64 }).notNull(),
    engineVersion: varchar('engine_version', { length: 20 }).notNull(),
    state: varchar('state', { length: 20 }).$type<JobState>().notNull().default('queued'),
    /** (lab, kind, input hash, engine version) while queued or running, null afterwards. */
    activeKey: varchar('active_key', { length: 200 }),
    done: int('done').notNull().default(0),
    total: int('total').notNull().default(0),
    stage: varchar('stage', { length: 80 }).notNull().default(''),
    attempts: int('attempts').notNull().default(0),
    leaseUntil: instant('lease_until'),
    leaseOwner: varchar('lease_owner', { length: 64 }),
    error: text('error'),
    resultId: id('result_id'),
    askedBy: id('asked_by')
      .notNull()
      .references(() => user.id),
    createdAt: createdAt(),
    endedAt: instant('ended_at'),
  },
  (t) => [
    uniqueIndex('job_active').on(t.activeKey),
    index('job_claim').on(t.state, t.createdAt),
    index('job_study').on(t.studyId, t.createdAt),
  ],
);

export const auditEvent = mysqlTable(
  'audit_event',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    studyId: id('study_id'),
    actorId: id('actor_id'),
    event: varchar('event', { length: 60 }).notNull(),
    subjectId: id('subject_id'),
    data: shape<Record<string, unknown>>('data').notNull(),
    at: instant('at').notNull().default(sql`CURRENT_TIMESTAMP(3)`),
  },
  (t) => [index('audit_lab_at').on(t.labId, t.at)],
);

/** A waiting row is claimed by its row lock alone, so a crash gives it back by itself. */
export const outboxStates = ['waiting', 'sent', 'dead'] as const;
export type OutboxKind =
  | 'reminder'
  | 'assigned'
  | 'moved'
  | 'cancelled'
  | 'stop'
  | 'approval asked'
  | 'approved'
  | 'sent back';

export const outbox = mysqlTable(
  'outbox',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    kind: varchar('kind', { length: 20 }).$type<OutboxKind>().notNull(),
    /** (session, recipient, offset, sequence) for reminders; a slot sends once. */
    slot: varchar('slot', { length: 180 }).notNull(),
    sessionId: id('session_id'),
    studyId: id('study_id'),
    recipientId: id('recipient_id')
      .notNull()
      .references(() => user.id),
    sequence: int('sequence').notNull().default(0),
    data: shape<Record<string, unknown>>('data').notNull(),
    dueAt: instant('due_at').notNull(),
    state: varchar('state', { length: 20 })
      .$type<(typeof outboxStates)[number]>()
      .notNull()
      .default('waiting'),
    attempts: int('attempts').notNull().default(0),
    messageId: varchar('message_id', { length: 200 }),
    error: text('error'),
    sentAt: instant('sent_at'),
    createdAt: createdAt(),
  },
  (t) => [
    uniqueIndex('outbox_slot').on(t.slot),
    index('outbox_claim').on(t.state, t.dueAt),
    index('outbox_session').on(t.sessionId),
  ],
);

/** The worker's heartbeat, read by the health check. */
export const workerBeat = mysqlTable('worker_beat', {
  id: varchar('id', { length: 40 }).primaryKey(),
  at: instant('at').notNull(),
  pid: int('pid').notNull(),
});

/** Fixed-window counts of attempts, by what is limited. */
export const rateCount = mysqlTable('rate_count', {
  key: varchar('rate_key', { length: 160 }).primaryKey(),
  windowStart: bigint('window_start', { mode: 'number' }).notNull(),
  count: double('count').notNull(),
});
