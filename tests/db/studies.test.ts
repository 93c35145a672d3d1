import { and, eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { studiesOfLab, studyById, studyProgress } from '@/db/queries/studies';
import { latestSystem, systemVersions } from '@/db/queries/systems';
import { auditEvent, study, systemVersion } from '@/db/schema';
import { createStudyInput } from '@/lib/contracts/forms/study';
import { changeStudy } from '@/lib/server/studies/change-study';
import { createStudy } from '@/lib/server/studies/create-study';
import { saveSystemVersion } from '@/lib/server/systems/save-version';
import { library } from '@/lib/sim/library';
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
const published = () => {
  const first = library[0];
  if (!first) throw new Error('the library is empty');
  return { kind: 'library' as const, modelId: first.id };
};
const input = (over: Record<string, unknown> = {}) =>
  createStudyInput.parse({ ...studyFields({ rigId: ours.rigId, ...over }), from: published() });

const problem = (at: string, code = 'invalid-input') =>
  expect.objectContaining({ code, detail: expect.objectContaining({ at }) });

describe('a new study', () => {
  test('comes with version 1 of its system, both on the audit trail', async () => {
    const wanted = input();
    await createStudy(context(), wanted);
    const made = await studyById(db, { labId: ours.labId, studyId: wanted.id });
    expect(made).toMatchObject({ title: wanted.title, rigName: 'Vessel A', ceilingDose: 2.8 });
    const system = await latestSystem(db, { labId: ours.labId, studyId: wanted.id });
    expect(system).toMatchObject({ number: 1, model: library[0]?.model });
    const trail = await db.select().from(auditEvent).where(eq(auditEvent.studyId, wanted.id));
    expect(trail.map((e) => e.event).sort()).toEqual(['study.created', 'system.version']);
  });

  test('asked for twice at once with one id is one study', async () => {
    const wanted = input();
    const answers = await Promise.all([
      createStudy(context(), wanted),
      createStudy(context(), wanted),
      createStudy(context(), wanted),
    ]);
    expect(answers).toEqual(answers.map(() => ({ studyId: wanted.id })));
    const rows = await db.select().from(systemVersion).where(eq(systemVersion.studyId, wanted.id));
    expect(rows).toHaveLength(1);
  });

  test('does not take over an id that another lab used', async () => {
    const wanted = input();
    await createStudy(context(), wanted);
    const foreign = { ...wanted, rigId: null };
    await expect(createStudy(context(theirs.head), foreign)).rejects.toMatchObject({
      code: 'not-found',
    });
    expect(await studiesOfLab(db, { labId: theirs.labId })).toEqual([]);
  });

  test('on animals or volunteers is refused without a reference, and without an expiry to come', async () => {
    for (const perturbs of ['animal', 'human volunteer'] as const) {
      const bare = { ...input(), perturbs };
      await expect(createStudy(context(), bare)).rejects.toEqual(problem('approvalReference'));
      const referenced = { ...bare, approvalReference: 'EC 12/26' };
      await expect(createStudy(context(), referenced)).rejects.toEqual(problem('approvalExpires'));
      const expired = { ...referenced, approvalExpires: '2026-11-30' };
      await expect(createStudy(context(), expired)).rejects.toEqual(problem('approvalExpires'));
      expect(await studyById(db, { labId: ours.labId, studyId: bare.id })).toBeNull();
      const form = { ...studyFields({ perturbs }), from: published() };
      const paths = createStudyInput.safeParse(form).error?.issues.map((i) => i.path[0]);
      expect(paths).toEqual(['approvalReference', 'approvalExpires']);
    }
  });

  test('keeps its approval to the end of the last day in the lab’s zone', async () => {
    const wanted = { ...input(), approvalReference: 'EC 12/26', approvalExpires: '2026-12-01' };
    await createStudy(context(), wanted);
    const made = await studyById(db, { labId: ours.labId, studyId: wanted.id });
    // Berlin is UTC+1 in December: the day ends at 23:00 UTC.
    expect(made?.approvalExpires?.toISOString()).toBe('2026-12-01T22:59:59.999Z');
  });

  test('cannot use another lab’s rig or copy another lab’s study', async () => {
    await expect(createStudy(context(), { ...input(), rigId: theirs.rigId })).rejects.toEqual(
      problem('rigId'),
    );
    const foreign = createStudyInput.parse({ ...studyFields(), from: published() });
    await createStudy(context(theirs.head), foreign);
    const copy = { ...input(), from: { kind: 'study' as const, studyId: foreign.id } };
    await expect(createStudy(context(), copy)).rejects.toMatchObject({ code: 'not-found' });
  });

  test('needs a ceiling, a largest step above 0 and stop rules in words', () => {
    const paths = (over: Record<string, unknown>) =>
      createStudyInput
        .safeParse({ ...studyFields(over), from: published() })
        .error?.issues.map((i) => i.path.join('.'));
    expect(paths({})).toBeUndefined();
    expect(paths({ ceilingDose: null })).toEqual(['ceilingDose']);
    expect(paths({ largestStep: 0 })).toEqual(['largestStep']);
    expect(paths({ stopRules: '  ' })).toEqual(['stopRules']);
    expect(paths({ title: '' })).toEqual(['title']);
  });
});

describe('a version of a system', () => {
  const version = (studyId: string, basedOn: number) => ({
    id: uuid(),
    studyId,
    basedOn,
    model: brusselator,
    control: brusselatorControl,
    reason: 'Measured again',
  });
  const newStudy = async () => (await createStudy(context(), input())).studyId;

  test('gets the next number, and the older ones stay as they were', async () => {
    const studyId = await newStudy();
    const of = { labId: ours.labId, studyId };
    const before = await latestSystem(db, of);
    const saved = await saveSystemVersion(context(), version(studyId, 1));
    expect(saved).toEqual({ outcome: 'saved', number: 2 });
    const kept = (await systemVersions(db, of)).map((v) => v.number);
    expect(kept).toEqual([2, 1]);
    const [first] = await db
      .select()
      .from(systemVersion)
      .where(and(eq(systemVersion.studyId, studyId), eq(systemVersion.number, 1)));
    expect(first?.model).toEqual(before?.model);
  });

  test('from an older version is a conflict that names who and when, and writes nothing', async () => {
    const studyId = await newStudy();
    const head = { ...context(ours.head), now: new Date('2026-12-01T13:30:00Z') };
    await saveSystemVersion(head, version(studyId, 1));
    const late = saveSystemVersion(context(), version(studyId, 1));
    await expect(late).rejects.toMatchObject({ code: 'conflict' });
    await expect(late).rejects.toThrow(/Hanna Head saved System v2 on 1 Dec 2026, 14:30/);
    const of = { labId: ours.labId, studyId };
    expect((await systemVersions(db, of)).map((v) => v.number)).toEqual([2, 1]);
  });

  test('saved by two people at once is one version and one conflict', async () => {
    const studyId = await newStudy();
    const outcomes = await Promise.allSettled([
      saveSystemVersion(context(), version(studyId, 1)),
      saveSystemVersion(context(ours.head), version(studyId, 1)),
    ]);
    expect(outcomes.map((o) => o.status).sort()).toEqual(['fulfilled', 'rejected']);
  });

  test('sent twice with one id is one version', async () => {
    const studyId = await newStudy();
    const wanted = version(studyId, 1);
    const answers = await Promise.all([
      saveSystemVersion(context(), wanted),
      saveSystemVersion(context(), wanted),
    ]);
    expect(answers).toEqual(answers.map(() => ({ outcome: 'saved', number: 2 })));
  });

  test('of another lab’s study is not found', async () => {
    const studyId = await newStudy();
    const foreign = saveSystemVersion(context(theirs.head), version(studyId, 1));
    await expect(foreign).rejects.toMatchObject({ code: 'not-found' });
  });

  test('that cannot be worked with is not saved', async () => {
    const studyId = await newStudy();
    const model = { ...brusselator, equations: { ...brusselator.equations, x: 'A - (B + 1)*q' } };
    const saved = await saveSystemVersion(context(), { ...version(studyId, 1), model });
    expect(saved).toMatchObject({ outcome: 'to mend', problems: [{ at: 'model.equations.x' }] });
    const of = { labId: ours.labId, studyId };
    expect(await systemVersions(db, of)).toHaveLength(1);
  });
});

test('a change of a study’s limits keeps what they were, with the reason', async () => {
  const wanted = input();
  await createStudy(context(), wanted);
  const { id, from: _from, ...fields } = wanted;
  const change = { ...fields, studyId: id, ceilingDose: 2.5, reason: 'Pump limit' };
  await changeStudy(context(ours.head), change);
  const made = await studyById(db, { labId: ours.labId, studyId: id });
  expect(made?.ceilingDose).toBe(2.5);
  const [event] = await db
    .select()
    .from(auditEvent)
    .where(and(eq(auditEvent.studyId, id), eq(auditEvent.event, 'study.changed')));
  expect(event?.data).toEqual({
    reason: 'Pump limit',
    was: { ceilingDose: 2.8 },
    is: { ceilingDose: 2.5 },
  });
  const foreign = changeStudy(context(theirs.head), { ...change, rigId: null });
  await expect(foreign).rejects.toMatchObject({ code: 'not-found' });
});

test('the signal line of a new study waits for its prediction; another lab sees no study', async () => {
  const { studyId } = await createStudy(context(), input());
  const stations = await studyProgress(db, { labId: ours.labId, studyId });
  expect(stations?.map((s) => [s.key, s.state, s.fact])).toEqual([
    ['system', 'done', 'v1'],
    ['prediction', 'later', 'none yet'],
    ['series', 'later', 'none yet'],
    ['sessions', 'later', 'none yet'],
    ['readings', 'later', 'none yet'],
    ['onset', 'later', 'not yet observed'],
  ]);
  expect(await studyProgress(db, { labId: theirs.labId, studyId })).toBeNull();
  expect(await studyById(db, { labId: theirs.labId, studyId })).toBeNull();
  const mine = await db.select().from(study).where(eq(study.id, studyId));
  expect(mine).toHaveLength(1);
});
