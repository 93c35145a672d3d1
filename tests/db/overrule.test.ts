import { desc, eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { auditEvent, job, level, onsetEstimate, reading, runVerdict } from '@/db/schema';
import { overruleForm } from '@/lib/contracts/forms/readings';
import { buildEvidence } from '@/lib/server/evidence/build-evidence';
import { overruleVerdict } from '@/lib/server/evidence/overrule-verdict';
import type { EvidencePlan } from '@/lib/server/evidence/plan';
import { MOST_POINTS } from '@/lib/server/evidence/record-to-judge';
import { runRows } from '@/lib/server/evidence/run-rows';
import {
  contextOf,
  type EvidenceLab,
  estimateNow,
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
beforeAll(async () => {
  lab = await evidenceLab(db);
});

/** A sine of amplitude 1 around 3, every 6 s over an hour and a half, from the setting on. */
async function record(runId: string, n = 900, everySeconds = 6) {
  const rows = Array.from({ length: n }, (_, i) => ({
    id: uuid(),
    labId: lab.labId,
    runId,
    readout: 'x',
    minutes: (i * everySeconds) / 60,
    value: 3 + Math.sin((2 * Math.PI * i * everySeconds) / 60) + 0.05 * Math.sin(i * i),
    state: 'value' as const,
    byId: lab.technician.userId,
  }));
  for (let i = 0; i < rows.length; i += 3000)
    await db.insert(reading).values(rows.slice(i, i + 3000));
}

async function judgedRun() {
  const made = await studyWithRuns(db, lab, { levels: 3 });
  const r = made.runs[0]!;
  await setRun(db, { runId: r.id, by: lab.technician.userId, at: NOW, dose: r.dose });
  await record(r.id);
  const { rows } = await estimateNow(db, lab, made.studyId);
  return { ...made, run: r, row: rows.find((x) => x.id === r.id)! };
}

const overrule = (of: { studyId: string; runId: string; seen: string | null }, over = {}) =>
  overruleVerdict(
    contextOf(db, lab.investigator),
    overruleForm.parse({
      studyId: of.studyId,
      runId: of.runId,
      seenVerdictId: of.seen,
      verdict: 'steady',
      reason: 'The pump beat once a minute.',
      ...over,
    }),
  );

describe('an overruled verdict', () => {
  test('counts, with its reason; the computed one stays and the onset is asked for anew', async () => {
    const { studyId, run: r, row } = await judgedRun();
    expect(row).toMatchObject({ way: 'computed', readings: 900 });
    expect(row.period!.value).toBeCloseTo(60, 0);
    const done = await overrule({ studyId, runId: r.id, seen: row.verdictId });
    const [after] = (await runRows(db, { labId: lab.labId, studyId })).filter((x) => x.id === r.id);
    expect(after).toMatchObject({ verdict: 'steady', way: 'overruled' });
    expect(after!.computed?.verdict).toBe(row.verdict);
    expect(after!.history.map((h) => [h.kind, h.byName])).toEqual([
      ['overruled', 'Ines Investigator'],
      ['computed', null],
    ]);
    const [asked] = await db.select().from(job).where(eq(job.id, done.jobId!));
    const plan = asked!.input as EvidencePlan;
    expect(plan.runs[0]).toMatchObject({ fixed: true, level: { verdict: 'steady' } });
    await workJob(db, done.jobId!);
    const [newest] = await db
      .select()
      .from(onsetEstimate)
      .where(eq(onsetEstimate.studyId, studyId))
      .orderBy(desc(onsetEstimate.id))
      .limit(1);
    expect(newest!.requests[0]!.levels[0]!.verdict).toBe('steady');
    const trail = await db.select().from(auditEvent).where(eq(auditEvent.subjectId, r.id));
    expect(trail.filter((e) => e.event === 'verdict.overruled')).toHaveLength(1);
    // Judged again from the same record: nothing new is said.
    const all = await db.select().from(runVerdict).where(eq(runVerdict.runId, r.id));
    expect(all).toHaveLength(2);
  });

  test('by two people at once is taken once, and the other is told', async () => {
    const { studyId, run: r, row } = await judgedRun();
    const of = { studyId, runId: r.id, seen: row.verdictId };
    const answers = await Promise.allSettled([overrule(of), overrule(of, { verdict: 'damped' })]);
    expect(answers.filter((a) => a.status === 'fulfilled')).toHaveLength(1);
    const refused = answers.find((a) => a.status === 'rejected');
    expect(refused?.reason).toMatchObject({ code: 'conflict' });
  });

  test('needs a reason, a verdict that stands, and a run of this lab', async () => {
    const { studyId, run: r, runs, row } = await judgedRun();
    expect(() => overrule({ studyId, runId: r.id, seen: null }, { reason: ' ' })).toThrow();
    await expect(overrule({ studyId, runId: runs[1]!.id, seen: null })).rejects.toMatchObject({
      code: 'not-possible',
    });
    const theirs = await evidenceLab(db);
    const form = overruleForm.parse({
      studyId,
      runId: r.id,
      seenVerdictId: row.verdictId,
      verdict: 'steady',
      reason: 'not theirs to say',
    });
    await expect(overruleVerdict(contextOf(db, theirs.head), form)).rejects.toMatchObject({
      code: 'not-found',
    });
  });
});

describe('what is judged', () => {
  test('leaves the planned settling out, and says so with the verdict', async () => {
    const { studyId, run: r, row } = await judgedRun();
    const [planned] = await db.select().from(level).where(eq(level.id, r.levelId));
    expect(planned!.settleMinutes).toBeGreaterThan(0);
    const plan = (await buildEvidence(db, { labId: lab.labId, studyId }))!;
    // The model's unit of time is the second.
    expect(plan.runs[0]!.judge!.from).toBeCloseTo(planned!.settleMinutes * 60, 9);
    expect(plan.runs[0]!.judge!.times[10]).toBeCloseTo(60, 9);
    expect(row.computed!.answer!.reasons.join(' ')).toContain('of the settling');
  });

  test('is averaged where a record is too long for one question, and says by how much', async () => {
    const made = await studyWithRuns(db, lab, { levels: 3 });
    const r = made.runs[0]!;
    await setRun(db, { runId: r.id, by: lab.technician.userId, at: NOW, dose: r.dose });
    await record(r.id, 45_000, 0.5);
    const plan = (await buildEvidence(db, { labId: lab.labId, studyId: made.studyId }))!;
    const { judge, said } = plan.runs[0]!;
    expect(judge!.times).toHaveLength(15_000);
    expect(judge!.times.length).toBeLessThanOrEqual(MOST_POINTS);
    expect(said[0]).toBe('Each point is the mean of 3 readings in succession.');
    // Three readings half a second apart, from 0 s on: their mean time is half a second.
    expect(judge!.times[0]).toBeCloseTo(0.5, 9);
    expect(JSON.stringify(plan).length).toBeLessThan(1_000_000);
  });
});
