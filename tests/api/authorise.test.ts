import { eq, sql } from 'drizzle-orm';
import { NextRequest } from 'next/server';
import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, beforeEach, describe, expect, test, vi } from 'vitest';
import { GET as jobState } from '@/app/api/v1/jobs/[jobId]/route';
import { GET as refusedRows } from '@/app/api/v1/studies/[studyId]/uploads/[uploadId]/problems/route';
import { POST as uploadFile } from '@/app/api/v1/studies/[studyId]/uploads/route';
import { absence, type Role, roles, workingHours } from '@/db/schema';
import { actions, authorise } from '@/lib/server/authorise';
import { closeDatabase } from '@/lib/server/database';
import { enqueue } from '@/lib/server/jobs/queue';
import type { Member } from '@/lib/server/member';
import { pressStop } from '@/lib/server/stops/press-stop';
import { acting, type FreshLab, freshLab, MONDAY, openTestDatabase } from '../setup/fresh-lab';
import { laidOutStudy, newestVersion } from '../setup/fresh-study';
import { addPerson, type Ids, operations, unknownIds } from './operations';
import { type Rule, roleTable } from './role-table';

const signedIn = vi.hoisted(() => ({ member: null as unknown }));
vi.mock('next/cache', () => ({ revalidatePath: () => {} }));
vi.mock('@/lib/server/member', async (original) => {
  const { AppError } = await import('@/lib/server/errors');
  return {
    ...(await original<typeof import('@/lib/server/member')>()),
    requireMember: async () => {
      if (signedIn.member) return signedIn.member;
      throw new AppError('not-signed-in', 'Your session has ended.');
    },
  };
});

const { db, close } = openTestDatabase();
let ours: FreshLab;
let theirs: FreshLab;
let ids: Ids;

async function idsOf(lab: FreshLab): Promise<Ids> {
  const { studyId, predictionId, rows } = await laidOutStudy(db, lab);
  const { ref } = await newestVersion(db, lab, studyId);
  const first = rows[0]!;
  const { stopId } = await pressStop(acting(db, lab.people.head), { studyId });
  const { jobId } = await enqueue(db, {
    labId: lab.labId,
    studyId,
    askedBy: lab.people.head.userId,
    kind: 'predict',
    input: { wait: lab.labId },
  });
  const labId = lab.labId;
  const absenceId = uuid();
  const span = { from: MONDAY, to: MONDAY, reason: 'x' };
  await db.insert(absence).values({ id: absenceId, labId, userId: null, ...span });
  const [hours] = await db.select().from(workingHours).where(eq(workingHours.labId, labId));
  return {
    studyId,
    predictionId,
    seriesVersionId: ref.seriesVersionId,
    revision: ref.revision,
    sessionId: first.session.id,
    sessionRevision: first.session.revision + 1,
    visitId: first.visits[0]!.id,
    runId: first.run.id,
    stopId,
    jobId,
    userId: lab.people.technician.userId,
    rigId: lab.rigId,
    hoursId: hours!.id,
    absenceId,
  };
}

beforeAll(async () => {
  ours = await freshLab(db);
  theirs = await freshLab(db);
  ids = await idsOf(ours);
});
afterAll(async () => {
  await closeDatabase();
  await close();
});
const signIn = (member: Member | null) => {
  signedIn.member = member;
};
beforeEach(() => signIn(null));

/** Every row of every table, as one checksum each: nothing at all may have been written. */
async function everything(): Promise<string> {
  const [tables] = await db.execute(sql`
    select table_name as name from information_schema.tables where table_schema = database()`);
  const names = (tables as unknown as { name: string }[]).map((t) => `\`${t.name}\``);
  const [sums] = await db.execute(sql.raw(`checksum table ${names.join(', ')}`));
  return JSON.stringify(sums);
}
const problemOf = async (answer: ReturnType<(typeof operations)[number]['call']>) => {
  const result = await answer;
  return result.ok ? null : result.problem;
};

describe('what each role may do', () => {
  const cells = actions.flatMap((rule) => roles.map((role) => [rule, role] as const));

  test('is asked of exactly the rules that are written down', () => {
    expect([...actions].sort()).toEqual(Object.keys(roleTable).sort());
  });

  test.each(cells)('%s, as %s', (rule, role) => {
    expect(authorise(role, rule)).toBe(roleTable[rule as Rule][role]);
  });
});

describe('every action', () => {
  test('is among the operations tried here', async () => {
    const modules = import.meta.glob('../../app/**/*actions.ts', { eager: true });
    const exported = Object.entries(modules).flatMap(([path, module]) =>
      Object.entries(module as Record<string, unknown>).map(([name, action]) => ({
        path,
        name,
        action,
      })),
    );
    expect(exported.length).toBeGreaterThan(25);
    const tried = new Set([...operations, addPerson].map((o) => o.action));
    // One's own password names nobody else.
    const left = exported.filter((e) => !tried.has(e.action)).map((e) => e.name);
    expect(left).toEqual(['changePasswordAction']);
  });

  test.each([...operations, addPerson].map((o) => [o.name, o] as const))(
    '%s asks for a session before anything else',
    async (_name, operation) => {
      expect(await problemOf(operation.call(ids))).toMatchObject({ code: 'not-signed-in' });
    },
  );

  const forbidden = [...operations, addPerson].flatMap((o) =>
    roles
      .filter((role) => roleTable[o.rule][role] === 'no')
      .map((role) => [o.name, role, o] as const),
  );
  test.each(forbidden)('%s is forbidden to the %s, and writes nothing', async (_n, role, o) => {
    signIn(ours.people[role as Role]);
    const before = await everything();
    const problem = await problemOf(o.call(ids));
    expect(problem).toMatchObject({ code: 'forbidden' });
    // It says who can.
    expect(problem?.mend).toContain('head');
    expect(await everything()).toBe(before);
  });

  const allowed = operations.flatMap((o) =>
    roles
      .filter((role) => roleTable[o.rule][role] !== 'no')
      .map((role) => [o.name, role, o] as const),
  );
  test.each(allowed)(
    '%s by the %s of another lab finds nothing and writes nothing',
    async (_n, role, o) => {
      signIn(theirs.people[role as Role]);
      const before = await everything();
      const stranger = await problemOf(o.call(ids));
      const nobody = await problemOf(o.call(unknownIds()));
      expect(stranger).toMatchObject({ code: o.unknown ?? 'not-found' });
      expect(stranger).toEqual(nobody);
      expect(await everything()).toBe(before);
    },
  );

  test('is seen to write where it may, so that the comparison can fail', async () => {
    signIn(ours.people.head);
    const before = await everything();
    expect(await problemOf(addPerson.call(ids))).toBeNull();
    expect(await everything()).not.toBe(before);
  });
});

describe('every route', () => {
  const url = 'http://127.0.0.1:3000/api/v1/x';
  const get = () => new NextRequest(url);
  const post = (origin = 'http://127.0.0.1:3000') => {
    const form = new FormData();
    form.set('file', new File(['time,x\n1,2\n'], 'a.csv', { type: 'text/csv' }));
    form.set('runId', ids.runId);
    form.set(
      'mapping',
      JSON.stringify({
        delimiter: ',',
        decimalMark: '.',
        timeColumn: 'time',
        timeKind: 'elapsed',
        timeUnit: 'min',
        valueColumns: [{ column: 'x', readout: 'x' }],
      }),
    );
    return new NextRequest(url, {
      method: 'POST',
      body: form,
      headers: { origin, host: '127.0.0.1:3000' },
    });
  };
  const params = <P>(of: P) => ({ params: Promise.resolve(of) });
  const uploadIds = () => ({ studyId: ids.studyId, uploadId: uuid() });

  test('asks for a session', async () => {
    const answers = await Promise.all([
      jobState(get(), params({ jobId: ids.jobId })),
      refusedRows(get(), params(uploadIds())),
      uploadFile(post(), params({ studyId: ids.studyId })),
    ]);
    expect(answers.map((a) => a.status)).toEqual([401, 401, 401]);
  });

  test('answers a stranger like somebody who names nothing', async () => {
    signIn(ours.people.observer);
    expect((await jobState(get(), params({ jobId: ids.jobId }))).status).toBe(200);
    signIn(theirs.people.head);
    const stranger = await jobState(get(), params({ jobId: ids.jobId }));
    const nobody = await jobState(get(), params({ jobId: uuid() }));
    expect([stranger.status, await stranger.json()]).toEqual([404, await nobody.json()]);
    const before = await everything();
    const upload = await uploadFile(post(), params({ studyId: ids.studyId }));
    const nothing = await uploadFile(post(), params({ studyId: uuid() }));
    expect([upload.status, await upload.json()]).toEqual([404, await nothing.json()]);
    expect(await everything()).toBe(before);
  });

  test('takes no file from an observer, nor from another site’s page', async () => {
    const before = await everything();
    signIn(ours.people.observer);
    expect((await uploadFile(post(), params({ studyId: ids.studyId }))).status).toBe(403);
    signIn(ours.people.technician);
    const foreign = post('https://elsewhere.example');
    expect((await uploadFile(foreign, params({ studyId: ids.studyId }))).status).toBe(403);
    expect(await everything()).toBe(before);
  });
});
