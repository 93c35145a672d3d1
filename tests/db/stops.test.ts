import { and, eq, like } from 'drizzle-orm';
import { afterAll, describe, expect, test } from 'vitest';
import { outbox, run, session, stopOrder } from '@/db/schema';
import { recordVisit } from '@/lib/server/bench/record-visit';
import { startSession } from '@/lib/server/bench/start-session';
import { liftStop } from '@/lib/server/stops/lift-stop';
import { pressStop } from '@/lib/server/stops/press-stop';
import { takeBackStop } from '@/lib/server/stops/take-back';
import { acting, DAY, freshLab, MONDAY, openTestDatabase, plus } from '../setup/fresh-lab';
import {
  askedLayOut,
  type CalendarRow,
  calendarOf,
  laidOutStudy,
  workJob,
} from '../setup/fresh-study';

const { db, close } = openTestDatabase();
afterAll(close);

const climb = { replicates: 2, levels: 2 } as const;

async function begin(wanted: Parameters<typeof laidOutStudy>[2] = climb) {
  const lab = await freshLab(db);
  const about = await laidOutStudy(db, lab, wanted);
  return { lab, ...about };
}
type Begun = Awaited<ReturnType<typeof begin>>;

const runsOf = (rows: CalendarRow[]) => [...new Map(rows.map((r) => [r.run.id, r.run])).values()];
const statesOf = async (studyId: string) => {
  const rows = await calendarOf(db, studyId);
  const runs = new Map(runsOf(rows).map((r) => [r.id, r.state]));
  return { runs, sessions: new Map(rows.map((r) => [r.session.id, r.session.state])), rows };
};

/** Sets the dose of the first run of a preparation, as the technician would. */
async function setFirst({ lab, rows }: Begun, preparationId: string) {
  const row = rows.find(
    (r) => r.run.preparationId === preparationId && r.visits.some((v) => v.kind === 'set dose'),
  )!;
  const by = acting(db, lab.people.technician, row.session.startsAt);
  const at = row.session.startsAt.toISOString();
  await startSession(by, { sessionId: row.session.id, at });
  await recordVisit(by, {
    sessionId: row.session.id,
    visitId: row.visits.find((v) => v.kind === 'set dose')!.id,
    at,
    outcome: 'done',
    remark: '',
    dose: row.run.dose,
    values: [],
  });
  return row;
}
const press = (of: Begun, sessionId?: string, now = MONDAY) =>
  pressStop(acting(db, of.lab.people.technician, now), { studyId: of.studyId, sessionId });
const lift = (of: Begun, stopId: string, now = MONDAY) =>
  liftStop(acting(db, of.lab.people.head, now), { stopId, reason: 'The leak is closed.' });

describe('a stop', () => {
  test('holds that preparation and every unstarted run at this dose or above, and nothing else', async () => {
    const of = await begin();
    const runs = runsOf(of.rows);
    const doses = [...new Set(runs.map((r) => r.dose))].sort((a, b) => a - b);
    expect(doses.length).toBeGreaterThan(2);
    const [a] = [...new Set(runs.map((r) => r.preparationId))];
    // Pressed at the second dose of preparation A.
    const at = of.rows.find((r) => r.run.preparationId === a && r.run.dose === doses[1])!;
    const before = await statesOf(of.studyId);
    await press(of, at.session.id);
    const after = await statesOf(of.studyId);
    for (const r of runs) {
      const held = r.preparationId === a || r.dose >= doses[1]!;
      expect([r.dose, after.runs.get(r.id)]).toEqual([r.dose, held ? 'suspended' : 'planned']);
    }
    for (const { session: s, run: r } of before.rows) {
      const held = r.preparationId === a || r.dose >= doses[1]!;
      expect(after.sessions.get(s.id)).toBe(held ? 'suspended' : 'planned');
    }
  });

  test('leaves another preparation’s run that has begun to itself', async () => {
    const of = await begin();
    const runs = runsOf(of.rows);
    const [a, b] = [...new Set(runs.map((r) => r.preparationId))];
    const begun = await setFirst(of, b!);
    const at = of.rows.find((r) => r.run.preparationId === a && r.run.dose === begun.run.dose)!;
    await press(of, at.session.id, begun.session.startsAt);
    const after = await statesOf(of.studyId);
    expect(after.runs.get(begun.run.id)).toBe('settling');
    const others = [...after.runs].filter(([id]) => id !== begun.run.id);
    expect(new Set(others.map(([, s]) => s))).toEqual(new Set(['suspended']));
  });

  test.each(['human volunteer', 'animal'] as const)(
    'in a study on %ss holds the whole study, what has begun included',
    async (perturbs) => {
      const approval = { approvalReference: 'EC 12/7', approvalExpires: plus(MONDAY, 300 * DAY) };
      const of = await begin({ ...climb, perturbs, ...approval });
      const [a] = runsOf(of.rows).map((r) => r.preparationId);
      const begun = await setFirst(of, a!);
      const last = of.rows.at(-1)!;
      await press(of, last.session.id, begun.session.startsAt);
      const after = await statesOf(of.studyId);
      expect(new Set(after.runs.values())).toEqual(new Set(['suspended']));
      const open = [...after.sessions.values()].filter((s) => s !== 'done');
      expect(new Set(open)).toEqual(new Set(['suspended']));
    },
  );

  test('keeps the bench from starting a session and from setting a dose', async () => {
    const of = await begin();
    const [first] = of.rows;
    const at = first!.session.startsAt;
    const by = acting(db, of.lab.people.technician, at);
    await press(of, first!.session.id, at);
    const start = startSession(by, { sessionId: first!.session.id, at: at.toISOString() });
    await expect(start).rejects.toMatchObject({ code: 'conflict' });
    await expect(start).rejects.toThrow(/stop holds this session/);
    // Whatever state the session is in: the run itself is held.
    for (const state of ['missed', 'started'] as const) {
      await db.update(session).set({ state }).where(eq(session.id, first!.session.id));
      const visitId = first!.visits.find((v) => v.kind === 'set dose')!.id;
      await startSession(by, { sessionId: first!.session.id, at: at.toISOString() }).catch(
        () => {},
      );
      const set = recordVisit(by, {
        sessionId: first!.session.id,
        visitId,
        at: at.toISOString(),
        outcome: 'done',
        remark: '',
        dose: first!.run.dose,
        values: [],
      });
      await expect(set).rejects.toMatchObject({ code: 'conflict' });
    }
    const [row] = await db.select().from(run).where(eq(run.id, first!.run.id));
    expect(row).toMatchObject({ state: 'suspended', setAt: null });
  });

  test('keeps the same doses from being laid out anew until the head lifts it', async () => {
    const of = await begin();
    const { stopId } = await press(of);
    await db.update(run).set({ state: 'cancelled' }).where(eq(run.studyId, of.studyId));
    const ask = () => askedLayOut(db, of.lab, of.studyId);
    await expect(ask()).rejects.toMatchObject({ code: 'not-possible' });
    await expect(ask()).rejects.toThrow(/stop/i);
    await lift(of, stopId);
    await expect(ask()).resolves.toHaveProperty('jobId');
  });

  test('pressed while sessions are being laid out keeps them from being placed', async () => {
    const lab = await freshLab(db);
    const about = await laidOutStudy(db, lab, climb);
    // Nothing is left on the calendar that a stop could change.
    await db.update(run).set({ state: 'cancelled' }).where(eq(run.studyId, about.studyId));
    const { jobId } = await askedLayOut(db, lab, about.studyId);
    await press({ lab, ...about });
    await expect(workJob(db, jobId)).rejects.toThrow(/stop/i);
  });
});

describe('a slip', () => {
  test('within ten seconds gives back exactly what was there, and alarms nobody', async () => {
    const of = await begin();
    const before = await statesOf(of.studyId);
    const { stopId } = await press(of);
    const waiting = and(like(outbox.slot, `stop:${stopId}:%`), eq(outbox.state, 'waiting'));
    const mails = await db.select().from(outbox).where(waiting);
    expect(mails.length).toBeGreaterThan(1);
    // Nobody is told before the seconds of a slip have passed.
    expect(mails.every((m) => +m.dueAt >= +plus(MONDAY, 10_000))).toBe(true);
    await takeBackStop(acting(db, of.lab.people.technician, plus(MONDAY, 10_000)), { stopId });
    const after = await statesOf(of.studyId);
    expect(after.runs).toEqual(before.runs);
    expect(after.sessions).toEqual(before.sessions);
    expect(await db.select().from(outbox).where(waiting)).toEqual([]);
    const [row] = await db.select().from(stopOrder).where(eq(stopOrder.id, stopId));
    expect(row?.slippedAt).toEqual(plus(MONDAY, 10_000));
  });

  test('is over afterwards, and is nobody else’s', async () => {
    const of = await begin();
    const { stopId } = await press(of);
    const slip = (who: 'technician' | 'head', seconds: number) =>
      takeBackStop(acting(db, of.lab.people[who], plus(MONDAY, seconds * 1000)), { stopId });
    await expect(slip('technician', 13)).rejects.toMatchObject({ code: 'forbidden' });
    await expect(slip('head', 2)).rejects.toMatchObject({ code: 'forbidden' });
    expect(new Set((await statesOf(of.studyId)).runs.values())).toEqual(new Set(['suspended']));
    await slip('technician', 9);
    await expect(slip('technician', 9)).rejects.toMatchObject({ code: 'conflict' });
  });
});

describe('lifting', () => {
  test('gives back what was held, with the reason on record and reminders written anew', async () => {
    const of = await begin();
    const before = await statesOf(of.studyId);
    const { stopId } = await press(of);
    const live = and(
      eq(outbox.labId, of.lab.labId),
      eq(outbox.kind, 'reminder'),
      eq(outbox.state, 'waiting'),
    );
    expect(await db.select().from(outbox).where(live)).toEqual([]);
    await lift(of, stopId);
    const after = await statesOf(of.studyId);
    expect(after.runs).toEqual(before.runs);
    expect(after.sessions).toEqual(before.sessions);
    expect((await db.select().from(outbox).where(live)).length).toBeGreaterThan(0);
    const [row] = await db.select().from(stopOrder).where(eq(stopOrder.id, stopId));
    expect(row).toMatchObject({
      liftedBy: of.lab.people.head.userId,
      liftReason: 'The leak is closed.',
    });
    await expect(lift(of, stopId)).rejects.toMatchObject({ code: 'conflict' });
  });

  test('one of two stops leaves what the other covers held, in either order', async () => {
    for (const firstLifted of ['narrow', 'wide'] as const) {
      const of = await begin();
      const narrow = await press(of, of.rows.at(-1)!.session.id);
      const wide = await press(of);
      const [one, two] = firstLifted === 'narrow' ? [narrow, wide] : [wide, narrow];
      await lift(of, one.stopId);
      const between = await statesOf(of.studyId);
      const dose = of.rows.at(-1)!.run.dose;
      const preparation = of.rows.at(-1)!.run.preparationId;
      for (const r of runsOf(of.rows)) {
        const covered =
          firstLifted === 'narrow' || r.preparationId === preparation || r.dose >= dose;
        expect(between.runs.get(r.id)).toBe(covered ? 'suspended' : 'planned');
      }
      await lift(of, two.stopId);
      const end = await statesOf(of.studyId);
      expect(new Set(end.runs.values())).toEqual(new Set(['planned']));
      expect(new Set(end.sessions.values())).toEqual(new Set(['planned']));
    }
  });
});
