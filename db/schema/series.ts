import {
  boolean,
  double,
  index,
  int,
  mysqlTable,
  text,
  uniqueIndex,
  varchar,
} from 'drizzle-orm/mysql-core';
import type { DesignAnswer, DesignRequest, LevelPurpose, SeriesOrder } from '@/lib/contracts';
import { createdAt, id, instant, primaryId, shape } from './columns';
import { lab, user } from './lab';
import { prediction, study } from './study';

export const seriesStates = ['draft', 'submitted', 'approved', 'superseded'] as const;
export type SeriesState = (typeof seriesStates)[number];
export const schemes = ['climb', 'fresh', 'parallel'] as const;
export type Scheme = (typeof schemes)[number];

/** What an approval allows; a later version inside it inherits the approval, on the record. */
export type Envelope = {
  doseLow: number;
  doseHigh: number;
  ceilingDose: number | null;
  largestStep: number | null;
  preparations: number;
  lastDate: string | null;
};

export const seriesVersion = mysqlTable(
  'series_version',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    studyId: id('study_id')
      .notNull()
      .references(() => study.id),
    number: int('number').notNull(),
    predictionId: id('prediction_id').references(() => prediction.id),
    state: varchar('state', { length: 20 }).$type<SeriesState>().notNull().default('draft'),
    scheme: varchar('scheme', { length: 20 }).$type<Scheme>().notNull(),
    order: varchar('series_order', { length: 20 }).$type<SeriesOrder>().notNull(),
    replicates: int('replicates').notNull(),
    /** What the engine was asked and answered, one pair an edge. */
    designs: shape<{ request: DesignRequest; answer: DesignAnswer }[]>('designs').notNull(),
    notes: shape<string[]>('notes').notNull(),
    reason: varchar('reason', { length: 300 }).notNull().default(''),
    envelope: shape<Envelope>('envelope'),
    createdBy: id('created_by')
      .notNull()
      .references(() => user.id),
    createdAt: createdAt(),
    submittedAt: instant('submitted_at'),
    decidedBy: id('decided_by').references(() => user.id),
    decidedAt: instant('decided_at'),
    decision: text('decision'),
    /** The approved version whose envelope covers this one. */
    inheritedFrom: id('inherited_from'),
    /** What the last lay-out could not place, and why, in words for the head. */
    unplaced: shape<{ what: string; reason: string }[]>('unplaced'),
    laidOutAt: instant('laid_out_at'),
    /** Raised at every change, so that two people at once are told. */
    revision: int('revision').notNull().default(1),
  },
  (t) => [uniqueIndex('series_version_study_number').on(t.studyId, t.number)],
);

export const level = mysqlTable(
  'level',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    seriesVersionId: id('series_version_id')
      .notNull()
      .references(() => seriesVersion.id),
    position: int('position').notNull(),
    dose: double('dose').notNull(),
    control: double('control').notNull(),
    purpose: varchar('purpose', { length: 20 }).$type<LevelPurpose>().notNull(),
    replicates: int('replicates').notNull(),
    settleMinutes: double('settle_minutes').notNull(),
    recordMinutes: double('record_minutes').notNull(),
    intervalMinutes: double('interval_minutes').notNull(),
    /** What bites: a cap on settling, a rate of sampling that cannot be had. */
    notes: shape<string[]>('notes').notNull(),
    locked: boolean('locked').notNull().default(false),
  },
  (t) => [index('level_series').on(t.seriesVersionId, t.position)],
);
