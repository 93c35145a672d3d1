import { z } from 'zod';
import { verdict } from '../common';

const id = z.uuid();

export const studyRef = z.strictObject({ studyId: id });

/** Another verdict than the one that stands, with the reason; the computed one stays visible. */
export const overruleForm = z.strictObject({
  studyId: id,
  runId: id,
  /** The verdict that stood when the form was shown, so that two people at once are told. */
  seenVerdictId: id.nullable(),
  verdict,
  reason: z
    .string()
    .trim()
    .min(3, 'say why, so that others can follow it')
    .max(1000, 'at most 1000 characters'),
});
export type OverruleForm = z.output<typeof overruleForm>;

/** Levels wanted after the evidence so far; scheme, order and preparations are the approved ones. */
export const replanForm = z.strictObject({
  studyId: id,
  levels: z
    .number({ error: 'give a number of levels' })
    .int('give a whole number of levels')
    .min(1, 'at least one level')
    .max(12, 'at most 12 levels an onset'),
});
export type ReplanForm = z.output<typeof replanForm>;

export const delimiters = [',', ';', '\t', '|'] as const;
export const timeUnits = ['ms', 's', 'min', 'h', 'd', 'wk'] as const;

const column = z.string().min(1, 'choose the column that holds the time').max(200);
const mark = z.string().trim().min(1).max(40);

/** How a table of readings is to be read, declared by whoever uploads it; nothing is guessed. */
export const uploadMapping = z
  .strictObject({
    delimiter: z.enum(delimiters, { error: 'say what stands between the columns' }),
    decimalMark: z.enum(['.', ','], {
      error: 'say which decimal mark the file uses; it is never guessed',
    }),
    timeColumn: column,
    timeKind: z.enum(['elapsed', 'date and clock'], { error: 'say what the time column holds' }),
    timeUnit: z.enum(timeUnits).optional(),
    /** IANA zone in which the instrument keeps time. */
    timeZone: z.string().min(1).max(64).optional(),
    /** Pattern such as dd.MM.yyyy HH:mm; ISO 8601 when left out. */
    dateFormat: z.string().trim().min(1).max(60).optional(),
    valueColumns: z
      .array(
        z.strictObject({
          column: z.string().max(200),
          readout: z.string().min(1, 'choose a readout').max(64),
        }),
      )
      .min(1, 'choose at least one column of values')
      .max(20, 'at most 20 columns of values'),
    missingMarks: z.array(mark).max(20).default([]),
    belowLimitMark: z.string().trim().min(1).max(10).optional(),
  })
  .refine((m) => m.delimiter !== m.decimalMark, {
    message: 'the decimal mark and the mark between columns cannot both be a comma',
    path: ['decimalMark'],
  })
  .refine((m) => m.timeKind !== 'elapsed' || m.timeUnit !== undefined, {
    message: 'say in which unit the time is',
    path: ['timeUnit'],
  })
  .refine((m) => m.timeKind === 'elapsed' || m.timeZone !== undefined, {
    message: 'say in which zone the clock runs',
    path: ['timeZone'],
  })
  .refine((m) => new Set(m.valueColumns.map((v) => v.readout)).size === m.valueColumns.length, {
    message: 'two columns are given to the same readout',
    path: ['valueColumns'],
  });
export type UploadMapping = z.output<typeof uploadMapping>;

/** The fields of the upload's form besides the file. */
export const uploadFields = z.strictObject({
  runId: id,
  sessionId: id.nullable(),
  mapping: uploadMapping,
});

/** What became of a file, as the page tells it. */
export type UploadAccount = {
  uploadId: string;
  kept: number;
  /** Rows that the run had already. */
  known: number;
  refused: number;
  problems: { row: number; column: string; text: string; reason: string; mend: string }[];
  remarks: string[];
  jobId: string | null;
};
