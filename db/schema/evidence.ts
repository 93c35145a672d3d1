import {
  bigint,
  char,
  double,
  index,
  int,
  mysqlTable,
  text,
  uniqueIndex,
  varchar,
} from 'drizzle-orm/mysql-core';
import type { EstimateAnswer, EstimateRequest, JudgeAnswer, Verdict } from '@/lib/contracts';
import { createdAt, id, primaryId, shape } from './columns';
import { lab, user } from './lab';
import { run, session } from './run';
import { prediction, study } from './study';

export type RowProblem = {
  row: number;
  column: string;
  text: string;
  reason: string;
  mend: string;
};

/** The raw file, never changed; its bytes lie under the data folder by their SHA-256. */
export const upload = mysqlTable(
  'upload',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    studyId: id('study_id')
      .notNull()
      .references(() => study.id),
    runId: id('run_id')
      .notNull()
      .references(() => run.id),
    sessionId: id('session_id').references(() => session.id),
    fileName: varchar('file_name', { length: 255 }).notNull(),
    bytes: bigint('bytes', { mode: 'number' }).notNull(),
    sha256: char('sha256', { length: 64 }).notNull(),
    /** Columns, decimal mark, time and units as declared by whoever uploaded it. */
    mapping: shape<Record<string, unknown>>('mapping').notNull(),
    rowsKept: int('rows_kept').notNull(),
    rowsRefused: int('rows_refused').notNull(),
    problems: shape<RowProblem[]>('problems').notNull(),
    byId: id('by_id')
      .notNull()
      .references(() => user.id),
    createdAt: createdAt(),
  },
  (t) => [uniqueIndex('upload_study_content').on(t.studyId, t.sha256)],
);

export const readingStates = ['value', 'missing', 'below limit'] as const;

export const reading = mysqlTable(
  'reading',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    runId: id('run_id')
      .notNull()
      .references(() => run.id),
    readout: varchar('readout', { length: 64 }).notNull(),
    /** Minutes since the setting, as measured; the planned time stays with the visit. */
    minutes: double('minutes').notNull(),
    value: double('value'),
    state: varchar('state', { length: 20 }).$type<(typeof readingStates)[number]>().notNull(),
    uploadId: id('upload_id').references(() => upload.id),
    /** Line of the file, from 1. */
    row: int('file_row'),
    visitId: id('visit_id'),
    byId: id('by_id')
      .notNull()
      .references(() => user.id),
    createdAt: createdAt(),
  },
  (t) => [index('reading_run_readout').on(t.runId, t.readout, t.minutes)],
);

/** Append-only: the newest counts, an overrule never erases the computed one. */
export const runVerdict = mysqlTable(
  'run_verdict',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    runId: id('run_id')
      .notNull()
      .references(() => run.id),
    kind: varchar('kind', { length: 20 }).$type<'computed' | 'overruled' | 'published'>().notNull(),
    verdict: varchar('verdict', { length: 20 }).$type<Verdict>().notNull(),
    readout: varchar('readout', { length: 64 }),
    answer: shape<JudgeAnswer>('answer'),
    reason: text('reason'),
    engineVersion: varchar('engine_version', { length: 20 }),
    byId: id('by_id').references(() => user.id),
    createdAt: createdAt(),
  },
  (t) => [index('run_verdict_run').on(t.runId, t.createdAt)],
);

export const onsetEstimate = mysqlTable(
  'onset_estimate',
  {
    id: primaryId(),
    labId: id('lab_id')
      .notNull()
      .references(() => lab.id),
    studyId: id('study_id')
      .notNull()
      .references(() => study.id),
    predictionId: id('prediction_id').references(() => prediction.id),
    /** One pair an onset that was predicted, in its order; one alone where none was. */
    requests: shape<EstimateRequest[]>('requests').notNull(),
    answers: shape<EstimateAnswer[]>('answers').notNull(),
    /** Runs that had a verdict when this was worked out. */
    runsJudged: int('runs_judged').notNull(),
    engineVersion: varchar('engine_version', { length: 20 }).notNull(),
    createdAt: createdAt(),
  },
  (t) => [index('onset_estimate_study').on(t.studyId, t.createdAt)],
);
