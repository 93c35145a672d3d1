import { and, eq, inArray, ne } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { levelsOf, seriesVersions } from '@/db/queries/series';
import { booking, job, preparation, run, runVerdict, session } from '@/db/schema';
import type { Verdict } from '@/lib/contracts';
import { replanForm } from '@/lib/contracts/forms/readings';
import { askEvidence } from '@/lib/server/evidence/ask-evidence';
import { type DesignResult, workDesign } from '@/lib/server/jobs/works/design';
import { askReplan } from '@/lib/server/replan/ask-replan';
import type { DesignPlan } from '@/lib/server/series/design-plan';
import {
  approveAndLayOut,
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

const LATER = new Date(NOW.getTime() + 5 * 3_600_000);

async function say(runId: string, verdict: Verdict) {
  await db.insert(runVerdict).values({
    id: uuid(),
    labId: lab.labId,
    runId,
    kind: 'published',
    verdict,
    reason: 'as published',
    createdAt: NOW,
  });
}

/** The first rows of a climb done: steady, steady, sustained …, the last of them still going on. */
async function halfDone(wanted: Parameters<typeof studyWithRuns>[2] = {}) {
  const made = await studyWithRuns(db, lab, { levels: 4, ...wanted });
  const own = made.runs.filter((r) => r.preparationId === made.runs[0]!.preparationId);
  const [first, second] = own;
  for (const [i, r] of [first!, second!].entries()) {
    const at = new Date(NOW.getTime() + i * 3_600_000);
    const state = i === 0 ? 'recorded' : 'settling';
    await setRun(db, { runId: r.id, by: lab.technician.userId, at, dose: r.dose, state });
    await say(r.id, 'steady');
  }
  const asked = await askEvidence(db, {
    labId: lab.labId,
    studyId: made.studyId,
    askedBy: lab.technician.userId,
  });
  await workJob(db, asked!.jobId);
  return {
    ...made,
    started: [first!, second!],
    rest: made.runs.filter((r) => r !== first && r !== second),
  };
}

const ask = (studyId: string, levels = 3, member = lab.investigator) =>
  askReplan(contextOf(db, member, LATER), replanForm.parse({ studyId, levels }));

describe('the next levels of a window with two onsets', () => {
  test('pass no limit on the way from one onset to the other, whatever the dose in force', () => {
    const control = { symbol: 'c', from: 0, to: 20 };
    const spread = (at: number) => Array.from({ length: 50 }, (_, i) => at + (i - 25) / 40);
    const request = (at: number, oscillates: 'above' | 'below', start: number) => ({
      onset: { values: spread(at) },
      oscillates,
      range: [0, 20] as [number, number],
      order: 'ascending' as const,
      levels: 3,
      replicates: 1,
      blur: 0,
      doubt: 0,
      limits: { start, ceiling: 18, largestStep: 2 },
      seed: 1,
    });
    for (const start of [0, 4.5, 9, 16]) {
      const plan: DesignPlan = {
        studyId: uuid(),
        predictionId: uuid(),
        scheme: 'climb',
        reason: '',
        requests: [request(5, 'above', start), request(14, 'below', start)],
        control,
        timeUnit: 'min',
        outlook: {
          branch: {
            control: [0, 20],
            growthRate: [-0.1, -0.1],
            frequency: [1, 1],
            stable: [true, true],
            steadyState: {},
          },
          cycles: [],
          onsets: [],
        },
        noise: null,
        settleCapMinutes: null,
        recordCapMinutes: null,
        replanned: true,
        replan: {
          beliefs: [{ values: spread(5) }, { values: spread(14) }],
          envelope: { doseLow: 1, doseHigh: 17, ceiling: 18, largestStep: 2 },
          done: [
            { dose: 2, verdict: 'steady' },
            { dose: 10, verdict: 'sustained' },
          ],
        },
      };
      const { levels, designs } = workDesign(plan, () => {}) as DesignResult;
      expect(designs).toHaveLength(2);
      expect(levels.map((l) => l.position)).toEqual(levels.map((_, i) => i + 1));
      const near = (at: number) =>
        levels.filter((l) => l.purpose === 'onset' && Math.abs(l.dose - at) < 1.5).length;
      expect(near(5)).toBe(3);
      expect(near(14)).toBe(3);
      let at = start;
      for (const l of levels) {
        expect(l.dose - at).toBeLessThanOrEqual(2 + 1e-9);
        expect(l.dose).toBeLessThanOrEqual(17);
        expect(l.dose).toBeGreaterThanOrEqual(1);
        at = l.dose;
      }
    }
  });
});

describe('the next levels of a study with done runs', () => {
  test('become a draft version inside the approval, each level with its reason', async () => {
    const { studyId, version, started } = await halfDone();
    const { jobId } = await ask(studyId);
    const draftId = (await workJob(db, jobId, LATER))!;
    const versions = await seriesVersions(db, { labId: lab.labId, studyId });
    expect(versions.map((v) => [v.number, v.state])).toEqual([
      [2, 'draft'],
      [1, 'approved'],
    ]);
    expect(versions[0]).toMatchObject({
      id: draftId,
      reason: 'replanned after 2 runs',
      scheme: 'climb',
      order: 'ascending',
    });
    const levels = await levelsOf(db, { labId: lab.labId, seriesVersionId: draftId });
    const envelope = version.envelope!;
    let before = started[1]!.dose;
    for (const l of levels) {
      expect(l.dose).toBeGreaterThanOrEqual(envelope.doseLow);
      expect(l.dose).toBeLessThanOrEqual(envelope.doseHigh);
      expect(l.dose - before).toBeLessThanOrEqual(0.5 + 1e-9);
      expect(l.notes[0]).toMatch(/^\d/);
      before = l.dose;
    }
    // Steady levels are decided: the new onset levels lie above them.
    const onsets = levels.filter((l) => l.purpose === 'onset').map((l) => l.dose);
    expect(onsets.length).toBeGreaterThan(0);
    expect(Math.min(...onsets)).toBeGreaterThan(started[1]!.dose);
  });

  test('inherit the approval and replace what has not begun; what has begun stays as it was', async () => {
    const { studyId, started, rest } = await halfDone({ replicates: 2 });
    const before = await db
      .select()
      .from(run)
      .where(
        inArray(
          run.id,
          started.map((r) => r.id),
        ),
      )
      .orderBy(run.number);
    const oldSessions = await db
      .select({ id: session.id, runId: booking.runId, state: session.state })
      .from(session)
      .innerJoin(booking, eq(booking.id, session.bookingId))
      .where(eq(session.studyId, studyId));
    const { jobId } = await ask(studyId);
    await workJob(db, jobId, LATER);
    const second = await approveAndLayOut(db, lab, studyId, LATER);
    expect(second).toMatchObject({ number: 2, state: 'approved' });
    expect(second.inheritedFrom).not.toBeNull();
    const after = await db
      .select()
      .from(run)
      .where(
        inArray(
          run.id,
          started.map((r) => r.id),
        ),
      )
      .orderBy(run.number);
    expect(after).toEqual(before);
    const gone = await db
      .select()
      .from(run)
      .where(
        inArray(
          run.id,
          rest.map((r) => r.id),
        ),
      );
    expect(gone.every((r) => r.state === 'cancelled')).toBe(true);
    const restIds = new Set(rest.map((r) => r.id));
    for (const s of oldSessions) {
      const [now] = await db.select().from(session).where(eq(session.id, s.id));
      expect(now!.state).toBe(restIds.has(s.runId) ? 'cancelled' : s.state);
    }
    const fresh = await db
      .select()
      .from(run)
      .where(and(eq(run.seriesVersionId, second.id), ne(run.state, 'cancelled')));
    expect(fresh.length).toBeGreaterThan(0);
    // The climb goes on with the preparations that live.
    const known = await db.select().from(preparation).where(eq(preparation.studyId, studyId));
    expect(known).toHaveLength(2);
    expect(new Set(fresh.map((r) => r.preparationId)).size).toBe(2);
  });

  test('asked for twice at once are one job', async () => {
    const { studyId } = await halfDone();
    const [a, b] = await Promise.all([ask(studyId), ask(studyId)]);
    expect(a.jobId).toBe(b.jobId);
    const jobs = await db
      .select()
      .from(job)
      .where(and(eq(job.studyId, studyId), eq(job.kind, 'design'), eq(job.state, 'queued')));
    expect(jobs).toHaveLength(1);
  });

  test('are refused, saying what is missing, before a prediction’s series is approved', async () => {
    const { studyId } = await predictedStudy(db, lab);
    await expect(ask(studyId)).rejects.toMatchObject({
      code: 'not-possible',
      userMessage: expect.stringContaining('approved'),
    });
  });

  test('are refused before any run has a verdict', async () => {
    const { studyId } = await studyWithRuns(db, lab);
    await expect(ask(studyId)).rejects.toMatchObject({ code: 'not-possible' });
  });

  test('of another lab’s study are not found', async () => {
    const { studyId } = await halfDone();
    const theirs = await evidenceLab(db);
    await expect(ask(studyId, 3, theirs.head)).rejects.toMatchObject({ code: 'not-found' });
  });

  test('cannot be asked for in nonsense numbers', () => {
    for (const levels of [0, 13, 1.5, Number.NaN]) {
      expect(replanForm.safeParse({ studyId: uuid(), levels }).success).toBe(false);
    }
  });
});
