import { and, eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { latestPrediction, predictionOutlines } from '@/db/queries/predictions';
import { studyProgress } from '@/db/queries/studies';
import { levelMarks, observedOnsets } from '@/db/queries/study-ribbons';
import { insertSystemVersion } from '@/db/queries/systems';
import {
  auditEvent,
  job,
  level,
  onsetEstimate,
  preparation,
  run,
  runVerdict,
  seriesVersion,
  study,
} from '@/db/schema';
import type { PredictAnswer } from '@/lib/contracts';
import { storePredict } from '@/lib/server/jobs/stores/predict';
import { askPrediction } from '@/lib/server/predictions/ask-prediction';
import {
  brusselator,
  brusselatorControl,
  newLab,
  openTestDatabase,
  studyFields,
} from './studies-fixture';

const { db, close } = openTestDatabase();
afterAll(close);

const now = new Date('2026-12-01T12:00:00Z');
let ours: Awaited<ReturnType<typeof newLab>>;
let theirs: Awaited<ReturnType<typeof newLab>>;
beforeAll(async () => {
  ours = await newLab(db);
  theirs = await newLab(db);
});
const context = (member = ours.investigator) => ({ db, member, now });

/** A study with `versions` versions of the Brusselator, made without the library. */
async function newStudy(versions = 1) {
  const { approvalExpires: _, ...fields } = studyFields();
  const by = { labId: ours.labId, createdBy: ours.head.userId };
  await db.insert(study).values({ ...fields, ...by });
  const systems: string[] = [];
  for (let number = 1; number <= versions; number += 1) {
    const id = uuid();
    const system = { model: brusselator, control: brusselatorControl, reason: '', createdAt: now };
    await insertSystemVersion(db, { ...by, ...system, id, studyId: fields.id, number });
    systems.push(id);
  }
  return { studyId: fields.id, systems };
}

/** The onset of the Brusselator with A = 1 is at B = 2 with period 2π (Prigogine & Lefever 1968). */
const onset = {
  value: 2,
  period: 2 * Math.PI,
  criticality: 'supercritical' as const,
  lyapunov: -1,
  oscillates: 'above' as const,
  growthSlope: 0.5,
  coexistence: null,
  steadyState: { x: 1, y: 2 },
  dose: 2,
  spread: {
    draws: 3,
    median: 2,
    low: 1.9,
    high: 2.1,
    none: 0,
    values: [1.9, 2, 2.1],
    doses: [1.9, 2, 2.1],
  },
};
const answer: PredictAnswer = {
  onsets: [onset],
  branch: {
    control: [1, 2, 3],
    growthRate: [-0.5, 0, 0.5],
    frequency: [1, 1, 1],
    stable: [true, true, false],
    steadyState: { x: [1, 1, 1], y: [1, 2, 3] },
  },
  cycles: [{ control: 2.1, period: 6.3, stable: true, readouts: { x: { min: 0.5, max: 1.5 } } }],
  notes: [],
};

const ask = (studyId: string, over = {}) =>
  askPrediction(context(), { studyId, systemNumber: 1, draws: 50, seed: 1, ...over });

async function stored(studyId: string, found: PredictAnswer = answer, over = {}) {
  const { jobId } = await ask(studyId, over);
  const [row] = await db.select().from(job).where(eq(job.id, jobId));
  await db.transaction((tx) => storePredict(tx, row!, found, now));
  await db.update(job).set({ state: 'done', activeKey: null }).where(eq(job.id, jobId));
  return jobId;
}

describe('asking for a prediction', () => {
  test('twice is one calculation and one line of the trail', async () => {
    const { studyId } = await newStudy();
    const first = await ask(studyId);
    const second = await ask(studyId);
    expect(second).toEqual({ jobId: first.jobId, joined: true });
    const trail = await db
      .select()
      .from(auditEvent)
      .where(and(eq(auditEvent.studyId, studyId), eq(auditEvent.event, 'prediction.asked')));
    expect(trail).toHaveLength(1);
    const other = await ask(studyId, { seed: 2 });
    expect(other.joined).toBe(false);
  });

  test('with an older version on the screen is refused, naming the newer one', async () => {
    const { studyId } = await newStudy(2);
    await expect(ask(studyId)).rejects.toMatchObject({ code: 'conflict' });
    await expect(ask(studyId)).rejects.toThrow(/Hanna Head saved System v2/);
    expect(await db.select().from(job).where(eq(job.studyId, studyId))).toEqual([]);
  });

  test('about another lab’s study finds nothing', async () => {
    const { studyId } = await newStudy();
    const input = { studyId, systemNumber: 1, draws: 50, seed: 1 };
    const foreign = askPrediction(context(theirs.head), input);
    await expect(foreign).rejects.toMatchObject({ code: 'not-found' });
  });
});

describe('a stored prediction', () => {
  test('says from which version, by whom and with which seed, and keeps its onsets', async () => {
    const { studyId, systems } = await newStudy();
    const jobId = await stored(studyId);
    const of = { labId: ours.labId, studyId };
    const found = await latestPrediction(db, of);
    expect(found).toMatchObject({
      jobId,
      systemVersionId: systems[0],
      systemNumber: 1,
      seed: 1,
      askedByName: 'Ines Investigator',
      answer,
    });
    expect(await latestPrediction(db, { ...of, labId: theirs.labId })).toBeNull();
    const outline = (await predictionOutlines(db, { ...of, studyIds: [studyId] })).get(studyId);
    expect(outline?.cycles).toEqual(answer.cycles);
    const { value, low, high, coexistence, dose } = outline!.onsets[0]!;
    expect({ value, low, high, coexistence, dose }).toEqual({
      value: 2,
      low: 1.9,
      high: 2.1,
      coexistence: null,
      dose: 2,
    });
  });

  test('keeps the coexistence window of the right onset in outline', async () => {
    const { studyId } = await newStudy();
    const window = { from: 2.4, to: 2.5 };
    const abrupt = { ...onset, value: 2.5, coexistence: window, oscillates: 'below' as const };
    await stored(studyId, { ...answer, onsets: [onset, abrupt] });
    const wanted = { labId: ours.labId, studyIds: [studyId] };
    const outline = (await predictionOutlines(db, wanted)).get(studyId);
    expect(outline?.onsets.map((o) => o.coexistence)).toEqual([null, window]);
  });

  test('without onsets has none in outline', async () => {
    const { studyId } = await newStudy();
    await stored(studyId, { ...answer, onsets: [], cycles: [] });
    const wanted = { labId: ours.labId, studyIds: [studyId] };
    expect((await predictionOutlines(db, wanted)).get(studyId)).toMatchObject({
      onsets: [],
      cycles: [],
    });
    const stations = await studyProgress(db, { labId: ours.labId, studyId });
    expect(stations?.[1]).toMatchObject({ fact: 'no onset', missing: 'a predicted onset' });
  });

  test('is stale once a newer system is saved', async () => {
    const { studyId } = await newStudy();
    await stored(studyId);
    const fresh = await studyProgress(db, { labId: ours.labId, studyId });
    expect(fresh?.[1]).toMatchObject({ state: 'done', fact: '1 onset', missing: null });
    const by = { labId: ours.labId, createdBy: ours.head.userId, studyId };
    const system = { model: brusselator, control: brusselatorControl };
    await insertSystemVersion(db, { ...by, ...system, id: uuid(), number: 2 });
    const stale = await studyProgress(db, { labId: ours.labId, studyId });
    expect(stale?.[1]).toMatchObject({ state: 'part', fact: 'from System v1' });
  });
});

test('ribbons show each run’s newest verdict, levels without a run as planned, and every observed onset', async () => {
  const { studyId } = await newStudy();
  const by = { labId: ours.labId, studyId };
  const seriesVersionId = uuid();
  await db.insert(seriesVersion).values({
    ...by,
    id: seriesVersionId,
    number: 1,
    scheme: 'climb',
    order: 'ascending',
    replicates: 1,
    designs: [],
    notes: [],
    createdBy: ours.head.userId,
  });
  const levels = [1.5, 2.5].map((dose, i) => ({
    id: uuid(),
    labId: ours.labId,
    seriesVersionId,
    position: i + 1,
    dose,
    control: dose,
    purpose: 'onset' as const,
    replicates: 1,
    settleMinutes: 1,
    recordMinutes: 1,
    intervalMinutes: 1,
    notes: [],
  }));
  await db.insert(level).values(levels);
  const preparationId = uuid();
  await db.insert(preparation).values({ ...by, id: preparationId, code: 'A' });
  const runId = uuid();
  const place = { dose: 1.5, control: 1.5, number: 1, direction: 'up' as const };
  const links = { seriesVersionId, levelId: levels[0]!.id, preparationId };
  await db.insert(run).values({ ...by, ...place, ...links, id: runId, state: 'recorded' });
  const verdicts = [
    { verdict: 'undecided' as const, kind: 'computed' as const, createdAt: now },
    { verdict: 'steady' as const, kind: 'overruled' as const, createdAt: new Date(+now + 1) },
  ];
  for (const v of verdicts) {
    await db.insert(runVerdict).values({ ...v, id: uuid(), labId: ours.labId, runId });
  }
  const wanted = { labId: ours.labId, studyIds: [studyId] };
  const marks = await levelMarks(db, wanted);
  expect(marks.map((m) => [m.control, m.state, m.direction])).toEqual([
    [1.5, 'steady', 'up'],
    [2.5, 'planned', null],
  ]);
  expect(await levelMarks(db, { ...wanted, labId: theirs.labId })).toEqual([]);

  const seen = (value: number) => ({
    onset: { value, low: value - 0.1, high: value + 0.1 },
    oscillates: 'above' as const,
    methods: [],
    byPreparation: [],
    hysteresis: null,
    agreement: null,
    updated: null,
  });
  const estimate = { ...by, requests: [], runsJudged: 1, engineVersion: '1' };
  const answers = [
    { onsets: [seen(2)], notes: [] },
    { onsets: [], notes: [] },
  ];
  await db.insert(onsetEstimate).values({ ...estimate, id: uuid(), answers, createdAt: now });
  expect((await observedOnsets(db, wanted)).get(studyId)?.map((o) => o.onset.value)).toEqual([2]);
  const one = await studyProgress(db, { labId: ours.labId, studyId });
  expect(one?.[5]).toMatchObject({ key: 'onset', fact: '1 of 1 observed', state: 'done' });
  const later = new Date(+now + 1000);
  const none = [{ onsets: [], notes: [] }];
  await db
    .insert(onsetEstimate)
    .values({ ...estimate, id: uuid(), answers: none, createdAt: later });
  const bound = await studyProgress(db, { labId: ours.labId, studyId });
  expect(bound?.[5]).toMatchObject({ fact: 'a bound only', state: 'part' });
});
