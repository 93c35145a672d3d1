import { double, index, int, mysqlTable, text, uniqueIndex, varchar } from 'drizzle-orm/mysql-core';
import { createdAt, id, instant, primaryId, shape } from './columns';
import { lab, rig, user } from './lab';
import { level, seriesVersion } from './series';
import { study } from './study';

export const runStates = [
  'planned',
  'tentative',
  'settling',
  'recording',
  'recorded',
  'suspended',
  'cancelled',
  'lost',
] as const;
export type RunState = (typeof runStates)[number];
export const sessionStates = [
  'planned',
  'started',
  'done',
  'missed',
  'suspended',
  'cancelled',
] as const;
export type SessionState = (typeof sessionStates)[number];
export const visitKinds = ['set dose', 'sample', 'check', 'collect'] as const;
export type VisitKind = (typeof visitKinds)[number];

export const preparation = mysqlTable(
  'preparation',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    studyId: id('study_id')
      .notNull()
      .references(() => study.id),
    code: varchar('code', { length: 40 }).notNull(),
    parentId: id('parent_id'),
    endedAt: instant('ended_at'),
    endReason: varchar('end_reason', { length: 300 }),
    createdAt: createdAt(),
  },
  (t) => [uniqueIndex('preparation_study_code').on(t.studyId, t.code)],
);

/** One preparation held at one level, as planned and as it happened. */
export const run = mysqlTable(
  'run',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    studyId: id('study_id')
      .notNull()
      .references(() => study.id),
    seriesVersionId: id('series_version_id')
      .notNull()
      .references(() => seriesVersion.id),
    levelId: id('level_id')
      .notNull()
      .references(() => level.id),
    preparationId: id('preparation_id')
      .notNull()
      .references(() => preparation.id),
    /** 1 on the way up, 2 on the way down, in a series that goes both ways. */
    pass: int('pass').notNull().default(1),
    number: int('number').notNull(),
    state: varchar('state', { length: 20 }).$type<RunState>().notNull().default('planned'),
    dose: double('dose').notNull(),
    control: double('control').notNull(),
    direction: varchar('direction', { length: 10 }).$type<'up' | 'down'>(),
    plannedStart: instant('planned_start'),
    plannedEnd: instant('planned_end'),
    /** The setting: every "hours since dose" counts from here. */
    setAt: instant('set_at'),
    setBy: id('set_by').references(() => user.id),
    deliveredDose: double('delivered_dose'),
    endedAt: instant('ended_at'),
    endReason: varchar('end_reason', { length: 300 }),
    createdAt: createdAt(),
  },
  (t) => [
    uniqueIndex('run_study_number').on(t.studyId, t.number),
    index('run_series').on(t.seriesVersionId),
  ],
);

/** A moment of a run at which somebody must be there. Minutes count from the setting. */
export const visit = mysqlTable(
  'visit',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    runId: id('run_id')
      .notNull()
      .references(() => run.id),
    kind: varchar('kind', { length: 20 }).$type<VisitKind>().notNull(),
    label: varchar('label', { length: 200 }).notNull(),
    atMinutes: double('at_minutes').notNull(),
    minutes: double('minutes').notNull(),
    earliest: instant('earliest').notNull(),
    latest: instant('latest').notNull(),
    doneAt: instant('done_at'),
    doneBy: id('done_by').references(() => user.id),
    /** Why it was skipped or late, in the words of whoever was there. */
    remark: varchar('remark', { length: 500 }),
    outcome: varchar('outcome', { length: 20 }).$type<'done' | 'late' | 'skipped'>(),
  },
  (t) => [index('visit_run').on(t.runId)],
);

/** A rig's occupation by one run. */
export const booking = mysqlTable(
  'booking',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    rigId: id('rig_id')
      .notNull()
      .references(() => rig.id),
    runId: id('run_id')
      .notNull()
      .references(() => run.id),
    from: instant('from_at').notNull(),
    to: instant('to_at').notNull(),
    state: varchar('state', { length: 20 }).$type<'held' | 'released'>().notNull().default('held'),
  },
  (t) => [index('booking_rig_from').on(t.rigId, t.from), index('booking_run').on(t.runId)],
);

/** The appointment that the calendar shows. */
export const session = mysqlTable(
  'session',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    studyId: id('study_id')
      .notNull()
      .references(() => study.id),
    bookingId: id('booking_id')
      .notNull()
      .references(() => booking.id),
    rigId: id('rig_id')
      .notNull()
      .references(() => rig.id),
    personId: id('person_id')
      .notNull()
      .references(() => user.id),
    startsAt: instant('starts_at').notNull(),
    endsAt: instant('ends_at').notNull(),
    state: varchar('state', { length: 20 }).$type<SessionState>().notNull().default('planned'),
    /** RFC 5545 SEQUENCE: rises when the time changes. */
    sequence: int('sequence').notNull().default(0),
    /** Rises at every change; a writer names the revision it saw. */
    revision: int('revision').notNull().default(1),
    startedAt: instant('started_at'),
    doneAt: instant('done_at'),
    changedBy: id('changed_by').references(() => user.id),
    changedAt: instant('changed_at'),
    createdAt: createdAt(),
  },
  (t) => [
    index('session_lab_starts').on(t.labId, t.startsAt),
    index('session_person_starts').on(t.personId, t.startsAt),
    index('session_study').on(t.studyId),
  ],
);

export const sessionVisit = mysqlTable(
  'session_visit',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    sessionId: id('session_id')
      .notNull()
      .references(() => session.id),
    visitId: id('visit_id')
      .notNull()
      .references(() => visit.id),
  },
  (t) => [
    uniqueIndex('session_visit_pair').on(t.sessionId, t.visitId),
    index('session_visit_visit').on(t.visitId),
  ],
);

/** A note or a deviation, written down by whoever saw it. Append-only. */
export const remark = mysqlTable(
  'remark',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    studyId: id('study_id')
      .notNull()
      .references(() => study.id),
    runId: id('run_id').references(() => run.id),
    sessionId: id('session_id').references(() => session.id),
    kind: varchar('kind', { length: 20 }).$type<'note' | 'deviation'>().notNull(),
    text: text('text').notNull(),
    byId: id('by_id')
      .notNull()
      .references(() => user.id),
    createdAt: createdAt(),
  },
  (t) => [index('remark_study').on(t.studyId, t.createdAt)],
);

/** A stop holds at once; "slip" takes it back within seconds; only the head lifts it. */
export const stopOrder = mysqlTable(
  'stop_order',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    studyId: id('study_id')
      .notNull()
      .references(() => study.id),
    runId: id('run_id').references(() => run.id),
    sessionId: id('session_id').references(() => session.id),
    preparationId: id('preparation_id').references(() => preparation.id),
    dose: double('dose'),
    wholeStudy: int('whole_study').notNull().default(0),
    /** What the stop suspended, with the state before it, so that lifting it restores exactly that. */
    suspended: shape<{
      runs: { id: string; state: RunState }[];
      sessions: { id: string; state: SessionState }[];
    }>('suspended').notNull(),
    byId: id('by_id')
      .notNull()
      .references(() => user.id),
    createdAt: createdAt(),
    slippedAt: instant('slipped_at'),
    liftedAt: instant('lifted_at'),
    liftedBy: id('lifted_by').references(() => user.id),
    liftReason: varchar('lift_reason', { length: 500 }),
  },
  (t) => [index('stop_order_study').on(t.studyId)],
);
