import { createHash } from 'node:crypto';
import { and, eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import type { Conn, Transaction } from '@/db/client';
import { latestSystem } from '@/db/queries/systems';
import { booking, run, session, study, upload, user } from '@/db/schema';
import type { UploadAccount, UploadMapping } from '@/lib/contracts/forms/readings';
import { stampText } from '@/lib/format';
import type { ActionContext } from '../action';
import { audit } from '../audit';
import { AppError, notFound } from '../errors';
import { askEvidence } from '../evidence/ask-evidence';
import { readoutsOf } from '../evidence/readouts';
import { holdFile } from '../files';
import { retryDeadlock } from '../retry-deadlock';
import { type ImportedFile, importFile } from './import-file';
import { insertReadings } from './insert-readings';

export type UploadInput = {
  studyId: string;
  runId: string;
  sessionId: string | null;
  mapping: UploadMapping;
  fileName: string;
  bytes: Uint8Array;
};

/** Problems that are kept with an upload and shown row by row; all of them are counted. */
const MOST_PROBLEMS = 500;

type Context = Pick<ActionContext, 'db' | 'member' | 'now'>;
type Target = Awaited<ReturnType<typeof targetOf>>;

/** A column can only be given to a readout that the newest system has. */
async function assertReadouts(conn: Conn, labId: string, input: UploadInput): Promise<void> {
  const system = await latestSystem(conn, { labId, studyId: input.studyId });
  const known = system ? readoutsOf(system.model).map((r) => r.symbol) : [];
  const strange = input.mapping.valueColumns.find((v) => !known.includes(v.readout));
  if (!strange) return;
  throw new AppError('invalid-input', `The system has no readout “${strange.readout}”.`, {
    at: 'mapping.valueColumns',
    mend: `Give the column “${strange.column}” to one of ${known.join(', ')}, or add the readout on the System page.`,
  });
}

/** The run that the readings belong to, of this lab and study, with its setting. */
async function targetOf(conn: Conn, labId: string, input: UploadInput) {
  const [found] = await conn
    .select({ study, run })
    .from(run)
    .innerJoin(study, eq(study.id, run.studyId))
    .where(and(eq(run.id, input.runId), eq(run.studyId, input.studyId), eq(run.labId, labId)));
  if (!found) throw notFound('run');
  const { setAt } = found.run;
  if (!setAt) {
    throw new AppError(
      'not-possible',
      `The dose of run ${found.run.number} has not been set yet, so its readings have no time to count from.`,
      { at: 'runId', mend: 'Do the session that sets the dose first, or choose another run.' },
    );
  }
  await assertReadouts(conn, labId, input);
  if (input.sessionId) {
    const [own] = await conn
      .select({ id: session.id })
      .from(session)
      .innerJoin(booking, eq(booking.id, session.bookingId))
      .where(
        and(
          eq(session.id, input.sessionId),
          eq(session.labId, labId),
          eq(booking.runId, found.run.id),
        ),
      );
    if (!own) throw notFound('session of this run');
  }
  return { ...found, setAt };
}

/** Refuses content that this study has already, naming who uploaded it, when and for which run. */
async function refuseKnown(conn: Conn, of: Context['member'], studyId: string, sha256: string) {
  const [known] = await conn
    .select({ upload, by: user.name, number: run.number })
    .from(upload)
    .innerJoin(user, eq(user.id, upload.byId))
    .innerJoin(run, eq(run.id, upload.runId))
    .where(and(eq(upload.labId, of.labId), eq(upload.studyId, studyId), eq(upload.sha256, sha256)));
  if (!known) return;
  const when = stampText(known.upload.createdAt, of.lab.timeZone);
  throw new AppError(
    'conflict',
    `${known.by} uploaded this file on ${when} as “${known.upload.fileName}”, for run ${known.number}. Nothing was kept twice.`,
    { at: 'file', mend: 'Choose another file; the readings of this one are in the study.' },
  );
}

const isDuplicate = (error: unknown): boolean => {
  const { code, cause } = (error ?? {}) as { code?: string; cause?: unknown };
  return code === 'ER_DUP_ENTRY' || (cause !== undefined && isDuplicate(cause));
};

type Parsed = { target: Target; imported: ImportedFile; sha256: string };

/** The row of the file itself; a second one of the same content waits here, then collides. */
async function insertUpload(
  tx: Transaction,
  { member, now }: Context,
  input: UploadInput,
  { target, sha256 }: Parsed,
): Promise<string> {
  const uploadId = uuid();
  await tx.insert(upload).values({
    id: uploadId,
    labId: member.labId,
    studyId: target.study.id,
    runId: target.run.id,
    sessionId: input.sessionId,
    fileName: input.fileName,
    bytes: input.bytes.byteLength,
    sha256,
    mapping: input.mapping,
    rowsKept: 0,
    rowsRefused: 0,
    problems: [],
    byId: member.userId,
    createdAt: now,
  });
  return uploadId;
}

async function store(
  tx: Transaction,
  context: Context,
  input: UploadInput,
  { target, imported, sha256 }: Parsed,
) {
  const { member, now } = context;
  const { labId } = member;
  // One upload of a run at a time, so that the same rows in two files are seen as the same.
  const [locked] = await tx.select().from(run).where(eq(run.id, target.run.id)).for('update');
  if (locked?.setAt?.getTime() !== target.setAt.getTime()) {
    throw new AppError('conflict', 'The setting of this run was changed meanwhile.', {
      mend: 'Reload the page and upload again.',
    });
  }
  const uploadId = await insertUpload(tx, context, input, { target, imported, sha256 });
  const inserted = await insertReadings(tx, {
    labId,
    runId: target.run.id,
    uploadId,
    byId: member.userId,
    now,
    rows: imported.rows,
  });
  const refused = imported.refused + inserted.problems.length;
  const problems = [...imported.problems, ...inserted.problems].slice(0, MOST_PROBLEMS);
  await tx
    .update(upload)
    .set({ rowsKept: inserted.kept, rowsRefused: refused, problems })
    .where(eq(upload.id, uploadId));
  await audit(tx, {
    labId,
    actorId: member.userId,
    event: 'readings.uploaded',
    studyId: target.study.id,
    subjectId: uploadId,
    data: {
      runId: target.run.id,
      fileName: input.fileName,
      sha256,
      kept: inserted.kept,
      known: inserted.known,
      refused,
    },
  });
  const asked = await askEvidence(tx, {
    labId,
    studyId: target.study.id,
    askedBy: member.userId,
  });
  const { kept, known } = inserted;
  return { uploadId, kept, known, refused, problems, jobId: asked?.jobId ?? null };
}

/**
 * Takes a file of readings in: the file as it is, its good rows as readings, its bad rows listed with
 * what is wrong and how to mend it. All of it or, on any failure, nothing.
 */
export async function acceptUpload(context: Context, input: UploadInput): Promise<UploadAccount> {
  const { db, member } = context;
  const target = await targetOf(db, member.labId, input);
  const sha256 = createHash('sha256').update(input.bytes).digest('hex');
  await refuseKnown(db, member, input.studyId, sha256);
  const imported = await importFile(input, {
    setAt: target.setAt,
    timeZone: member.lab.timeZone,
    now: context.now,
  });
  const file = await holdFile({ labId: member.labId, sha256 }, input.bytes);
  try {
    const stored = await retryDeadlock(() =>
      db.transaction(async (tx) => {
        const done = await store(tx, context, input, { target, imported, sha256 });
        await file.keep();
        return done;
      }),
    );
    return { ...stored, remarks: imported.remarks };
  } catch (error) {
    await file.drop();
    if (isDuplicate(error)) await refuseKnown(db, member, input.studyId, sha256);
    throw error;
  }
}
