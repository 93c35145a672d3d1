import { desc, eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { latestEstimate } from '@/db/queries/estimates';
import { latestPrediction } from '@/db/queries/predictions';
import {
  auditEvent,
  job,
  level,
  onsetEstimate,
  preparation,
  reading,
  run,
  runVerdict,
  seriesVersion,
} from '@/db/schema';
import type { Verdict } from '@/lib/contracts';
import { overruleForm } from '@/lib/contracts/forms/readings';
import { askEvidence } from '@/lib/server/evidence/ask-evidence';
import { buildEvidence } from '@/lib/server/evidence/build-evidence';
import { edgesOf } from '@/lib/server/evidence/onset-edges';
import { onsetView } from '@/lib/server/evidence/onset-view';
import { overruleVerdict } from '@/lib/server/evidence/overrule-verdict';
import type { EvidencePlan } from '@/lib/server/evidence/plan';
import { MOST_POINTS } from '@/lib/server/evidence/record-to-judge';
import { runRows } from '@/lib/server/evidence/run-rows';
import { controlToDose } from '@/lib/sim/dose-map';
import { library } from '@/lib/sim/library';
import {
  contextOf,
  type EvidenceLab,
  evidenceLab,
  NOW,
  predictedStudy,
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

const chemostat = library.find((m) => m.id === 'chemostat-predator-prey')!;

/** Runs at given control values with published verdicts, each a preparation of its own. */
async function published(studyId: string, trials: [control: number, verdict: Verdict][]) {
  const by = { labId: lab.labId, studyId };
  const seriesVersionId = uuid();
  await db.insert(seriesVersion).values({
    id: seriesVersionId,
    ...by,
    number: 1,
    state: 'approved',
    scheme: 'fresh',
    order: 'randomised',
    replicates: 1,
    designs: [],
    notes: [],
    createdBy: lab.head.userId,
  });
  for (const [i, [control, verdict]] of trials.entries()) {
    const [levelId, preparationId, runId] = [uuid(), uuid(), uuid()];
    const dose = controlToDose(chemostat.control.doseMap, control)!;
    await db.insert(level).values({
      id: levelId,
      labId: lab.labId,
      seriesVersionId,
      position: i + 1,
      dose,
      control,
      purpose: 'onset',
      replicates: 1,
      settleMinutes: 0,
      recordMinutes: 60,
      intervalMinutes: 5,
      notes: [],
    });
    await db.insert(preparation).values({ id: preparationId, ...by, code: `trial ${i + 1}` });
    await db.insert(run).values({
      id: runId,
      ...by,
      seriesVersionId,
      levelId,
      preparationId,
      number: i + 1,
      state: 'recorded',
      dose,
      control,
      deliveredDose: dose,
      setAt: NOW,
    });
    await db.insert(runVerdict).values({
      id: uuid(),
      labId: lab.labId,
      runId,
      kind: 'published',
      verdict,
      reason: 'As published.',
      createdAt: NOW,
    });
  }
}

async function estimateNow(studyId: string) {
  const asked = await askEvidence(db, {
    labId: lab.labId,
    studyId,
    askedBy: lab.technician.userId,
  });
  await workJob(db, asked!.jobId);
  const of = { labId: lab.labId, studyId };
  const [estimate, prediction, rows] = await Promise.all([
    latestEstimate(db, of),
    latestPrediction(db, of),
    runRows(db, of),
  ]);
  const view = onsetView(estimate!, { answer: prediction!.answer, unit: '1/d', rows });
  return { estimate: estimate!, prediction: prediction!, rows, view };
}

describe('the published chemostat', () => {
  // Fussmann, Ellner, Shertzer & Hairston 2000, Science 290:1358-1360: equilibria up to a dilution of
  // 0.32 per day, cycles from 0.64, one of two trials at 1.16 cycling, none above.
  test('brackets both onsets, and the lower one differs from its prediction', async () => {
    const { studyId } = await predictedStudy(db, lab, {
      model: chemostat.model,
      control: chemostat.control,
      draws: 200,
      over: { ceilingDose: null, largestStep: null },
    });
    await published(studyId, [
      [0.04, 'steady'],
      [0.32, 'steady'],
      [0.64, 'sustained'],
      [1.16, 'sustained'],
      [1.16, 'steady'],
      [1.37, 'steady'],
    ]);
    const { view, prediction, rows } = await estimateNow(studyId);
    // tests/sim/library.test.ts holds this onset against a formula of its own.
    expect(prediction.answer.onsets[0]!.value).toBeCloseTo(0.151, 3);
    expect(view.onsets.map((o) => o.oscillates)).toEqual(['above', 'below']);
    const [lower, upper] = view.onsets;
    expect(lower!.onset.low).toBeGreaterThanOrEqual(0.32);
    expect(lower!.onset.high).toBeLessThanOrEqual(0.64);
    // Between the last level where every trial cycled and the first where none did, about the split one.
    expect(upper!.onset.value).toBeGreaterThan(0.64);
    expect(upper!.onset.value).toBeLessThan(1.37);
    expect(upper!.onset.low).toBeLessThan(1.16);
    expect(upper!.onset.high).toBeGreaterThan(1.16);
    expect(lower!.agreement?.verdict).toBe('differs');
    expect(lower!.agreement!.difference).toBeGreaterThan(0);
    expect(view.words.paragraph).toContain('Steady up to 0.32/d and sustained from 0.64/d');
    expect(view.words.paragraph).toMatch(/lower onset differs from the predicted one/);
    expect(rows.every((r) => r.way === 'published' && r.computed === null)).toBe(true);
  });
});

describe('the levels on either side of an onset', () => {
  const at = (value: number, oscillates: 'above' | 'below') => ({ onset: { value }, oscillates });
  const runs = (list: [number, Verdict | null][]) =>
    list.map(([control, verdict]) => ({ control, verdict }));

  test('are those where all preparations show the same', () => {
    const seen = runs([
      [1, 'steady'],
      [2, 'damped'],
      [3, 'undecided'],
      [4, 'sustained'],
      [5, 'sustained'],
      [5, 'steady'],
      [6, 'steady'],
      [7, null],
    ]);
    expect(edgesOf(seen, at(3, 'above'))).toEqual({ steadyAt: 2, sustainedAt: 4 });
    expect(edgesOf(seen, at(5, 'below'))).toEqual({ steadyAt: 6, sustainedAt: 4 });
  });

  test('are not named where the verdicts do not change that way', () => {
    expect(edgesOf(runs([[1, 'steady']]), at(2, 'above'))).toBeNull();
    expect(
      edgesOf(
        runs([
          [1, 'steady'],
          [2, 'sustained'],
        ]),
        at(2, 'below'),
      ),
    ).toBeNull();
  });
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
  const { rows } = await estimateNow(made.studyId);
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
