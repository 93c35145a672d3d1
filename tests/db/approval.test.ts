import { eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { afterAll, describe, expect, test } from 'vitest';
import { auditEvent, level, outbox, seriesVersion, study } from '@/db/schema';
import { decideSeries } from '@/lib/server/series/decide';
import { submitSeries } from '@/lib/server/series/submit';
import { changeStudy } from '@/lib/server/studies/change-study';
import { createStudy } from '@/lib/server/studies/create-study';
import {
  acting,
  DAY,
  type FreshLab,
  freshLab,
  MONDAY,
  openTestDatabase,
  plus,
} from '../setup/fresh-lab';
import {
  approvedStudy,
  askedLayOut,
  designedSeries,
  newestVersion,
  predictedStudy,
} from '../setup/fresh-study';

const { db, close } = openTestDatabase();
afterAll(close);

const submit = async (lab: FreshLab, studyId: string, now = MONDAY) =>
  submitSeries(
    acting(db, lab.people.investigator, now),
    (await newestVersion(db, lab, studyId)).ref,
  );
const decide = async (
  lab: FreshLab,
  studyId: string,
  decision: 'approve' | 'send back' = 'approve',
  words = 'Good.',
  who: 'head' | 'investigator' = 'head',
) =>
  decideSeries(acting(db, lab.people[who]), {
    ...(await newestVersion(db, lab, studyId)).ref,
    decision,
    words,
  });

/** A further draft of an approved study, with its levels changed. */
async function further(
  lab: FreshLab,
  about: { studyId: string; predictionId: string },
  change: (doses: number[]) => number[] = (d) => d,
  wanted: Parameters<typeof designedSeries>[3] = {},
) {
  const seriesVersionId = await designedSeries(db, lab, about, wanted);
  const of = eq(level.seriesVersionId, seriesVersionId);
  const rows = await db.select().from(level).where(of).orderBy(level.position);
  const doses = change(rows.map((r) => r.dose));
  for (const [i, r] of rows.entries()) {
    await db.update(level).set({ dose: doses[i]! }).where(eq(level.id, r.id));
  }
  return seriesVersionId;
}
const stateOf = async (id: string) =>
  (await db.select().from(seriesVersion).where(eq(seriesVersion.id, id)))[0]!;

describe('a later version', () => {
  test('inside the approved envelope inherits the approval, on the record', async () => {
    const lab = await freshLab(db);
    const about = await approvedStudy(db, lab);
    const id = await further(lab, about);
    await submit(lab, about.studyId);
    const version = await stateOf(id);
    expect(version).toMatchObject({ state: 'approved', inheritedFrom: about.version.id });
    expect(version.envelope).toEqual(about.version.envelope);
    expect(version.decidedBy).toBe(lab.people.head.userId);
    expect((await stateOf(about.version.id)).state).toBe('superseded');
    const trail = await db.select().from(auditEvent).where(eq(auditEvent.subjectId, id));
    expect(trail.map((t) => t.event)).toContain('series.inherited');
    await expect(askedLayOut(db, lab, about.studyId)).resolves.toHaveProperty('jobId');
  });

  test.each<[string, Parameters<typeof further>[2], Parameters<typeof further>[3]]>([
    ['a dose above the approved ones', (d) => d.map((x, i) => (i === d.length - 1 ? 2.79 : x)), {}],
    ['a dose below the approved ones', (d) => d.map((x, i) => (i === 0 ? x - 0.05 : x)), {}],
    ['more preparations', undefined, { replicates: 3 }],
    ['another scheme', undefined, { scheme: 'fresh' }],
  ])('with %s goes to the head', async (_what, change, wanted) => {
    const lab = await freshLab(db);
    const about = await approvedStudy(db, lab, { replicates: 2, largestStep: 5 });
    const top = Math.max(...(about.version.envelope ? [about.version.envelope.doseHigh] : []));
    expect(top).toBeLessThan(3);
    if (change) {
      // The ceiling of the study lies above what was approved.
      await db.update(study).set({ ceilingDose: 3 }).where(eq(study.id, about.studyId));
      await db
        .update(seriesVersion)
        .set({ envelope: { ...about.version.envelope!, doseHigh: 2.5 } })
        .where(eq(seriesVersion.id, about.version.id));
    }
    const id = await further(lab, about, change, { replicates: 2, ...wanted });
    await submit(lab, about.studyId);
    expect(await stateOf(id)).toMatchObject({ state: 'submitted', inheritedFrom: null });
    expect((await stateOf(about.version.id)).state).toBe('approved');
    const asked = await db.select().from(outbox).where(eq(outbox.labId, lab.labId));
    const mails = asked.filter((m) => m.slot.startsWith(`ask:${id}:`));
    expect(mails.map((m) => m.recipientId)).toEqual([lab.people.head.userId]);
    await expect(askedLayOut(db, lab, about.studyId)).rejects.toThrow(/submitted, not approved/);
    await decide(lab, about.studyId);
    expect((await stateOf(id)).state).toBe('approved');
    expect((await stateOf(about.version.id)).state).toBe('superseded');
  });

  test('under another expiry of the approval goes to the head', async () => {
    const lab = await freshLab(db);
    const approval = { approvalReference: 'EC 1', approvalExpires: plus(MONDAY, 90 * DAY) };
    const about = await approvedStudy(db, lab, { perturbs: 'animal', ...approval });
    await db
      .update(study)
      .set({ approvalExpires: plus(MONDAY, 120 * DAY) })
      .where(eq(study.id, about.studyId));
    const id = await further(lab, about);
    await submit(lab, about.studyId);
    expect((await stateOf(id)).state).toBe('submitted');
  });
});

describe('limits', () => {
  test('a level above the ceiling or a step over the largest is neither submitted nor approved', async () => {
    const lab = await freshLab(db);
    const about = await predictedStudy(db, lab);
    const id = await further(lab, about, (d) => d.map((x, i) => (i === d.length - 1 ? 2.81 : x)));
    await expect(submit(lab, about.studyId)).rejects.toThrow(/above the ceiling of 2.8 mL\/h/);
    // Nor by a head who finds it submitted.
    await db.update(seriesVersion).set({ state: 'submitted' }).where(eq(seriesVersion.id, id));
    await expect(decide(lab, about.studyId)).rejects.toMatchObject({ code: 'not-possible' });
    await db.update(seriesVersion).set({ state: 'draft' }).where(eq(seriesVersion.id, id));
    await db.update(level).set({ dose: 1 }).where(eq(level.seriesVersionId, id));
    await db
      .update(level)
      .set({ dose: 1.51 })
      .where(eq(level.id, (await lastLevel(id)).id));
    await expect(submit(lab, about.studyId)).rejects.toThrow(/more than the largest step of 0.5/);
    expect((await stateOf(id)).state).toBe('draft');
  });

  const lastLevel = async (id: string) =>
    (await db.select().from(level).where(eq(level.seriesVersionId, id)).orderBy(level.position)).at(
      -1,
    )!;
});

describe('animals and volunteers', () => {
  test.each(['animal', 'human volunteer'] as const)(
    '%s: no series goes on without a reference and an expiry that lies ahead',
    async (perturbs) => {
      const lab = await freshLab(db);
      const about = await predictedStudy(db, lab, { perturbs });
      await designedSeries(db, lab, about);
      const set = (over: Partial<typeof study.$inferInsert>) =>
        db.update(study).set(over).where(eq(study.id, about.studyId));
      await expect(submit(lab, about.studyId)).rejects.toThrow(/approval reference and its expiry/);
      await set({ approvalReference: 'EC 9/26' });
      await expect(submit(lab, about.studyId)).rejects.toThrow(/approval reference and its expiry/);
      await set({ approvalExpires: plus(MONDAY, -1) });
      await expect(submit(lab, about.studyId)).rejects.toThrow(/EC 9\/26 expired/);
      await set({ approvalExpires: plus(MONDAY, 30 * DAY), ceilingDose: null });
      await expect(submit(lab, about.studyId)).rejects.toThrow(/ceiling dose/);
      await set({ ceilingDose: 2.8 });
      await submit(lab, about.studyId);
      expect((await newestVersion(db, lab, about.studyId)).state).toBe('submitted');
    },
  );

  test('the server asks for both when a study is made or changed', async () => {
    const lab = await freshLab(db);
    const fields = {
      title: 'Reflex under delay',
      summary: '',
      perturbs: 'human volunteer' as const,
      rigId: lab.rigId,
      doseLabel: 'Delay',
      doseUnit: 'ms',
      ceilingDose: 500,
      largestStep: 50,
      stopRules: 'Discomfort.',
    };
    const by = acting(db, lab.people.investigator);
    const make = (approvalReference: string | null, approvalExpires: string | null) =>
      createStudy(by, {
        id: uuid(),
        from: { kind: 'library', modelId: 'pupil-light-reflex' },
        ...fields,
        approvalReference,
        approvalExpires,
      });
    await expect(make(null, '2027-06-30')).rejects.toMatchObject({
      code: 'invalid-input',
      detail: { at: 'approvalReference' },
    });
    await expect(make('EC 1', null)).rejects.toMatchObject({ detail: { at: 'approvalExpires' } });
    await expect(make('EC 1', '2027-01-10')).rejects.toThrow(/expired on 2027-01-10/);
    const about = await approvedStudy(db, lab);
    const change = changeStudy(by, {
      studyId: about.studyId,
      ...fields,
      approvalReference: null,
      approvalExpires: null,
      reason: 'people now',
    });
    await expect(change).rejects.toMatchObject({ code: 'invalid-input' });
  });

  test('an author who approves says why, and it stays with the version', async () => {
    const lab = await freshLab(db);
    const approval = { approvalReference: 'EC 1', approvalExpires: plus(MONDAY, 90 * DAY) };
    const about = await predictedStudy(db, lab, { perturbs: 'human volunteer', ...approval });
    const id = await designedSeries(db, lab, about);
    await db
      .update(seriesVersion)
      .set({ createdBy: lab.people.head.userId })
      .where(eq(seriesVersion.id, id));
    await submit(lab, about.studyId);
    await expect(decide(lab, about.studyId, 'approve', '')).rejects.toMatchObject({
      code: 'invalid-input',
      detail: { at: 'words' },
    });
    await decide(lab, about.studyId, 'approve', 'The deputy is ill.');
    expect((await stateOf(id)).decision).toBe('Approved by its author. The deputy is ill.');
  });
});

test('sending back needs words, gives the version back to its author and tells them', async () => {
  const lab = await freshLab(db);
  const about = await predictedStudy(db, lab);
  const id = await designedSeries(db, lab, about);
  await submit(lab, about.studyId);
  await expect(submit(lab, about.studyId)).rejects.toMatchObject({ code: 'conflict' });
  await expect(decide(lab, about.studyId, 'send back', '')).rejects.toMatchObject({
    code: 'invalid-input',
  });
  await decide(lab, about.studyId, 'send back', 'Add a level below.');
  expect(await stateOf(id)).toMatchObject({ state: 'draft', envelope: null });
  await expect(decide(lab, about.studyId)).rejects.toMatchObject({ code: 'conflict' });
  const mails = await db.select().from(outbox).where(eq(outbox.labId, lab.labId));
  const told = mails.find((m) => m.kind === 'sent back');
  expect(told).toMatchObject({ recipientId: lab.people.investigator.userId });
  expect(told?.data.said).toBe('Add a level below.');
});

test('whoever decides on a version that was changed since is told by whom', async () => {
  const lab = await freshLab(db);
  const about = await predictedStudy(db, lab);
  await designedSeries(db, lab, about);
  const { ref } = await newestVersion(db, lab, about.studyId);
  await submit(lab, about.studyId);
  const stale = decideSeries(acting(db, lab.people.head), {
    ...ref,
    decision: 'approve',
    words: '',
  });
  await expect(stale).rejects.toMatchObject({ code: 'conflict' });
  await expect(stale).rejects.toThrow(new RegExp(lab.people.investigator.name));
});
