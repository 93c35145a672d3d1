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
import type { Control, PredictAnswer, PredictRequest, SystemModel } from '@/lib/contracts';
import { createdAt, id, instant, primaryId, shape } from './columns';
import { lab, rig, user } from './lab';

export const perturbed = [
  'chemical reaction',
  'micro-organisms',
  'cells or tissue',
  'animal',
  'human volunteer',
  'device',
] as const;
export type Perturbed = (typeof perturbed)[number];

export const study = mysqlTable(
  'study',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    title: varchar('title', { length: 200 }).notNull(),
    summary: varchar('summary', { length: 500 }).notNull().default(''),
    perturbs: varchar('perturbs', { length: 30 }).$type<Perturbed>().notNull(),
    libraryId: varchar('library_id', { length: 80 }),
    rigId: id('rig_id').references(() => rig.id),
    doseLabel: varchar('dose_label', { length: 80 }).notNull(),
    doseUnit: varchar('dose_unit', { length: 40 }).notNull(),
    ceilingDose: double('ceiling_dose'),
    largestStep: double('largest_step'),
    stopRules: text('stop_rules').notNull(),
    approvalReference: varchar('approval_reference', { length: 120 }),
    approvalExpires: instant('approval_expires'),
    /** Readings of this study come from the simulator; said wherever they show. */
    simulated: boolean('simulated').notNull().default(false),
    createdBy: id('created_by')
      .notNull()
      .references(() => user.id),
    createdAt: createdAt(),
  },
  (t) => [index('study_lab').on(t.labId)],
);

/** Immutable: a change makes the next number. */
export const systemVersion = mysqlTable(
  'system_version',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    studyId: id('study_id')
      .notNull()
      .references(() => study.id),
    number: int('number').notNull(),
    model: shape<SystemModel>('model').notNull(),
    control: shape<Control>('control').notNull(),
    reason: varchar('reason', { length: 300 }).notNull().default(''),
    createdBy: id('created_by')
      .notNull()
      .references(() => user.id),
    createdAt: createdAt(),
  },
  (t) => [uniqueIndex('system_version_study_number').on(t.studyId, t.number)],
);

export const prediction = mysqlTable(
  'prediction',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    studyId: id('study_id')
      .notNull()
      .references(() => study.id),
    systemVersionId: id('system_version_id')
      .notNull()
      .references(() => systemVersion.id),
    jobId: id('job_id'),
    seed: int('seed').notNull(),
    engineVersion: varchar('engine_version', { length: 20 }).notNull(),
    request: shape<PredictRequest>('request').notNull(),
    answer: shape<PredictAnswer>('answer').notNull(),
    createdAt: createdAt(),
  },
  (t) => [index('prediction_study').on(t.studyId, t.createdAt)],
);

/** One row an onset, for lists and ribbons that need no whole answer. */
export const predictedOnset = mysqlTable(
  'predicted_onset',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    predictionId: id('prediction_id')
      .notNull()
      .references(() => prediction.id),
    ordinal: int('ordinal').notNull(),
    value: double('value').notNull(),
    low: double('low'),
    high: double('high'),
    period: double('period').notNull(),
    oscillates: varchar('oscillates', { length: 10 }).$type<'above' | 'below'>().notNull(),
    dose: double('dose'),
  },
  (t) => [uniqueIndex('predicted_onset_ordinal').on(t.predictionId, t.ordinal)],
);
