import { createHash } from 'node:crypto';
import { stat } from 'node:fs/promises';
import { join } from 'node:path';
import { eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { lastMapping, uploadById, uploadList } from '@/db/queries/uploads';
import { auditEvent, job, reading, runVerdict, upload } from '@/db/schema';
import { type UploadMapping, uploadMapping } from '@/lib/contracts/forms/readings';
import { env } from '@/lib/server/env';
import { readKeptFile } from '@/lib/server/files';
import { acceptUpload } from '@/lib/server/uploads/accept-upload';
import {
  contextOf,
  type EvidenceLab,
  evidenceLab,
  NOW,
  setRun,
  studyWithRuns,
  workJob,
} from './evidence-fixture';
import { openTestDatabase } from './studies-fixture';

const { db, close } = openTestDatabase();
afterAll(close);
let lab: EvidenceLab;
let study: Awaited<ReturnType<typeof studyWithRuns>>;
const SET = new Date(NOW.getTime() - 3 * 86_400_000);
beforeAll(async () => {
  lab = await evidenceLab(db);
  study = await studyWithRuns(db, lab, { levels: 4 });
  for (const r of study.runs.slice(0, 3)) {
    await setRun(db, { runId: r.id, by: lab.technician.userId, at: SET, dose: r.dose });
  }
});

const plain: UploadMapping = uploadMapping.parse({
  delimiter: ',',
  decimalMark: '.',
  timeColumn: 'time',
  timeKind: 'elapsed',
  timeUnit: 's',
  valueColumns: [{ column: 'x', readout: 'x' }],
});

let salt = 0;
/** A file of `n` rows that no other test has. */
function table(n: number, row = (i: number) => `${i},${1 + i / 1000}`) {
  salt += 1;
  return `time,x,salt${salt}\n${Array.from({ length: n }, (_, i) => `${row(i)},0\n`).join('')}`;
}

function file(text: string | Uint8Array, over: Record<string, unknown> = {}) {
  return {
    studyId: study.studyId,
    runId: study.runs[0]!.id,
    sessionId: null,
    mapping: plain,
    fileName: 'record.csv',
    bytes: typeof text === 'string' ? new TextEncoder().encode(text) : text,
    ...over,
  };
}

const context = (member = lab.technician) => contextOf(db, member);
const send = (
  text: string | Uint8Array,
  over: Record<string, unknown> = {},
  member = lab.technician,
) => acceptUpload(context(member), file(text, over));
const readingsOf = (uploadId: string) =>
  db.select().from(reading).where(eq(reading.uploadId, uploadId)).orderBy(reading.minutes);
const uploads = async () =>
  (await db.select({ id: upload.id }).from(upload).where(eq(upload.studyId, study.studyId))).length;

describe('a file of readings', () => {
  test('becomes readings in minutes since the setting, is kept unchanged, and is judged', async () => {
    const text = table(40);
    const done = await send(text);
    expect(done).toMatchObject({ kept: 40, known: 0, refused: 0, problems: [], remarks: [] });
    const rows = await readingsOf(done.uploadId);
    expect(rows).toHaveLength(40);
    expect(rows[30]).toMatchObject({ minutes: 0.5, value: 1.03, row: 32, readout: 'x' });
    const sha256 = createHash('sha256').update(text).digest('hex');
    expect((await readKeptFile({ labId: lab.labId, sha256 })).toString()).toBe(text);
    const kept = await stat(join(env().DATA_DIR, 'uploads', lab.labId, sha256));
    expect(kept.mode & 0o777).toBe(0o600);
    const [asked] = await db.select().from(job).where(eq(job.id, done.jobId!));
    expect(asked).toMatchObject({ kind: 'evidence', studyId: study.studyId });
    const trail = await db.select().from(auditEvent).where(eq(auditEvent.subjectId, done.uploadId));
    expect(trail.map((e) => e.event)).toEqual(['readings.uploaded']);
    await workJob(db, done.jobId!);
    const verdicts = await db
      .select()
      .from(runVerdict)
      .where(eq(runVerdict.runId, study.runs[0]!.id));
    expect(verdicts.map((v) => v.kind)).toEqual(['computed']);
  });

  test('keeps good rows and lists bad ones with line, column, text, reason and how to mend it', async () => {
    const text = table(6, (i) => (i === 2 ? `${i},oops` : i === 4 ? `${i},"1,5"` : `${i},${i}`));
    const blank = text.replace('\n3,', '\n\n3,');
    const done = await send(blank, { runId: study.runs[1]!.id });
    expect(done).toMatchObject({ kept: 4, refused: 2 });
    expect(done.problems.map((p) => [p.row, p.column, p.text])).toEqual([
      [4, 'x', 'oops'],
      // The blank line counts: it is line 7 of the file.
      [7, 'x', '1,5'],
    ]);
    for (const p of done.problems) expect(p.reason.length * p.mend.length).toBeGreaterThan(100);
    const kept = await uploadById(db, {
      labId: lab.labId,
      studyId: study.studyId,
      uploadId: done.uploadId,
    });
    expect(kept).toMatchObject({ rowsKept: 4, rowsRefused: 2 });
    expect(kept?.problems).toEqual(done.problems);
  });

  test('with decimal commas, date and clock in a declared zone, missing and below-limit values', async () => {
    const mapping = uploadMapping.parse({
      delimiter: ';',
      decimalMark: ',',
      timeColumn: 'Zeit',
      timeKind: 'date and clock',
      timeZone: 'Europe/Berlin',
      dateFormat: 'dd.MM.yyyy HH:mm',
      valueColumns: [{ column: 'Wert', readout: 'y' }],
      missingMarks: ['n.a.'],
      belowLimitMark: '<',
    });
    // SET is 28 November 2026, 08:00 UTC: 09:00 in Berlin.
    const text =
      'Zeit;Wert\r\n28.11.2026 09:30;1,25\r\n28.11.2026 10:00;n.a.\r\n28.11.2026 10:30;<0,1\r\n28.11.2026 08:59;7\r\n';
    const done = await send(text, { mapping, runId: study.runs[2]!.id });
    expect((await readingsOf(done.uploadId)).map((r) => [r.minutes, r.value, r.state])).toEqual([
      [30, 1.25, 'value'],
      [60, null, 'missing'],
      [90, null, 'below limit'],
    ]);
    expect(done.problems).toHaveLength(1);
    expect(done.problems[0]).toMatchObject({ row: 5 });
    expect(done.problems[0]!.reason).toContain('before the dose was set');
  });

  test('is remarked on when its times lie in the future', async () => {
    const text = table(3, (i) => `${(i + 5) * 86_400},${i}`);
    const done = await send(text);
    expect(done.remarks[0]).toContain('3 readings lie in the future');
  });

  test('uploaded again is refused, naming who did it, when and for which run', async () => {
    const text = table(10, (i) => `${500 + i},1`);
    await send(text);
    const before = await uploads();
    await expect(send(text, { runId: study.runs[1]!.id }, lab.head)).rejects.toMatchObject({
      code: 'conflict',
      userMessage: expect.stringMatching(
        /Tove Technician uploaded this file on 1 Dec 2026, 08:00 as “record.csv”, for run 1/,
      ),
    });
    expect(await uploads()).toBe(before);
  });

  test('sent from two tabs at once is kept once', async () => {
    const text = table(2000, (i) => `${10_000 + i},${i}`);
    const before = await db
      .select({ id: reading.id })
      .from(reading)
      .where(eq(reading.runId, study.runs[0]!.id));
    const answers = await Promise.allSettled([send(text), send(text), send(text)]);
    expect(answers.filter((a) => a.status === 'fulfilled')).toHaveLength(1);
    for (const a of answers) {
      if (a.status === 'rejected') expect(a.reason).toMatchObject({ code: 'conflict' });
    }
    const after = await db
      .select({ id: reading.id })
      .from(reading)
      .where(eq(reading.runId, study.runs[0]!.id));
    expect(after.length - before.length).toBe(2000);
  });

  test('in a longer copy adds only what is new, and never writes a reading over', async () => {
    const row = (i: number) => `${20_000 + i / 7},${Math.sin(i)}`;
    const runId = study.runs[1]!.id;
    await send(table(50, row), { runId });
    const longer = table(60, (i) => (i === 10 ? `${20_000 + 10 / 7},99` : row(i)));
    const done = await send(longer, { runId });
    expect(done).toMatchObject({ kept: 10, known: 49, refused: 1 });
    expect(done.problems[0]).toMatchObject({ row: 12, column: 'x', text: '99' });
  });
});

describe('a file that cannot be taken', () => {
  const nothingKept = async (
    text: string | Uint8Array,
    over: Record<string, unknown>,
    said: Record<string, unknown>,
  ) => {
    const before = await uploads();
    await expect(send(text, over)).rejects.toMatchObject(said);
    expect(await uploads()).toBe(before);
  };

  test.each([
    ['a header alone', 'time,x\n', /header and no rows/],
    ['nothing at all', '\n\n', /empty/],
    [
      'binary content',
      new Uint8Array(4000).map((_, i) => (i * 37) % 256),
      /no text table|no column/,
    ],
    ['no such column', 'zeit,wert\n1,2\n', /no column "time"/],
    ['not one row that reads', 'time,x\nfoo,1\nbar,2\n', /None of the 2 rows/],
    ['cells run together', 'time;x\n1;2\n', /no column "time"/],
  ])('for %s is refused with an account, and nothing is half-saved', async (_, text, words) => {
    await nothingKept(
      text,
      {},
      {
        code: 'invalid-input',
        userMessage: expect.stringMatching(words),
        problems: expect.arrayContaining([expect.objectContaining({ mend: expect.any(String) })]),
      },
    );
  });

  test('for a readout that its mapping gives twice, or a mark that is also the delimiter', () => {
    const twice = [
      { column: 'x', readout: 'x' },
      { column: 'z', readout: 'x' },
    ];
    expect(uploadMapping.safeParse({ ...plain, valueColumns: twice }).success).toBe(false);
    expect(uploadMapping.safeParse({ ...plain, decimalMark: ',' }).success).toBe(false);
  });

  test('for a readout that the system does not have is refused, naming those it has', async () => {
    const mapping = { ...plain, valueColumns: [{ column: 'x', readout: 'zz' }] };
    await nothingKept(
      table(5),
      { mapping },
      {
        code: 'invalid-input',
        userMessage: expect.stringContaining('zz'),
      },
    );
  });

  test('for a run without a setting says what to do', async () => {
    await nothingKept(
      table(5),
      { runId: study.runs[3]!.id },
      {
        code: 'not-possible',
        detail: expect.objectContaining({ mend: expect.stringContaining('sets the dose') }),
      },
    );
  });

  test('for an unknown run, another lab’s run, or a session of another run is not found', async () => {
    await nothingKept(table(5), { runId: uuid() }, { code: 'not-found' });
    await nothingKept(table(5), { sessionId: uuid() }, { code: 'not-found' });
    const theirs = await evidenceLab(db);
    await expect(send(table(5), {}, theirs.head)).rejects.toMatchObject({ code: 'not-found' });
  });

  test('leaves nothing behind when its rows cannot be stored', async () => {
    const mapping = { ...plain, timeUnit: 'wk' as const };
    // 1e305 weeks are more minutes than a double holds.
    await nothingKept('time,x\n1e305,2\n', { mapping }, { code: 'invalid-input' });
  });
});

describe('what is known of uploads', () => {
  test('is listed to this lab alone, and proposes how the next file is read', async () => {
    const list = await uploadList(db, { labId: lab.labId, studyId: study.studyId });
    expect(list.length).toBeGreaterThan(3);
    expect(list[0]).toMatchObject({ by: 'Tove Technician', fileName: 'record.csv' });
    const theirs = await evidenceLab(db);
    expect(await uploadList(db, { labId: theirs.labId, studyId: study.studyId })).toEqual([]);
    const of = { labId: theirs.labId, studyId: study.studyId, uploadId: list[0]!.id };
    expect(await uploadById(db, of)).toBeNull();
    const own = { labId: lab.labId, studyId: study.studyId, rigId: lab.rigId };
    expect(uploadMapping.parse(await lastMapping(db, own))).toBeTruthy();
    expect(uploadMapping.parse(await lastMapping(db, { ...own, studyId: uuid() }))).toBeTruthy();
    expect(await lastMapping(db, { ...own, studyId: uuid(), rigId: null })).toBeNull();
  });
});
