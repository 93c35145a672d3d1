import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { level, preparation, run, runVerdict, seriesVersion } from '@/db/schema';
import type { Verdict } from '@/lib/contracts';
import { edgesOf } from '@/lib/server/evidence/onset-edges';
import { controlToDose } from '@/lib/sim/dose-map';
import { library } from '@/lib/sim/library';
import {
  type EvidenceLab,
  estimateNow,
  evidenceLab,
  NOW,
  predictedStudy,
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

describe('the published chemostat', () => {
  // Fussmann, Ellner, Shertzer & Hairston 2000, Science 290:1358-1360: equilibria up to a dilution of
  // 0.32 per day, cycles from 0.64, lost near 1.16, where one trial of two cycled. The ends of the range, 0.04
  // and 1.37, are inferred from that.
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
    const { view, prediction, rows } = await estimateNow(db, lab, studyId);
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
