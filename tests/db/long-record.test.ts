import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { recordOfRun } from '@/db/queries/records';
import { type UploadMapping, uploadMapping } from '@/lib/contracts/forms/readings';
import { acceptUpload } from '@/lib/server/uploads/accept-upload';
import {
  contextOf,
  type EvidenceLab,
  evidenceLab,
  NOW,
  setRun,
  studyWithRuns,
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
describe('a long record', () => {
  test('comes as means of readings in succession, missing ones left out of both', async () => {
    const runId = study.runs[2]!.id;
    const mapping = { ...plain, missingMarks: ['-'] };
    const done = await send(
      table(1000, (i) => `${i * 6},${i % 4 === 3 ? '-' : i}`),
      { runId, mapping },
    );
    expect(done.kept).toBe(1000);
    const of = { labId: lab.labId, runId, readout: 'x' };
    const all = await recordOfRun(db, { ...of, count: 1000, most: 1000 });
    expect(all.each).toBe(1);
    expect(all.values.slice(0, 4)).toEqual([0, 1, 2, null]);
    const means = await recordOfRun(db, { ...of, count: 1000, most: 250 });
    expect(means.each).toBe(4);
    expect(means.minutes).toHaveLength(250);
    means.values.forEach((v, i) => {
      expect(v).toBeCloseTo(4 * i + 1, 9);
    });
    // The mean of the times of those that have a value: 0, 6 and 12 s of each 24 s.
    expect(means.minutes[10]).toBeCloseTo((240 + 6) / 60, 9);
  });
});
