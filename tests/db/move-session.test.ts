import { eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import {
  absence,
  auditEvent,
  booking,
  membership,
  outbox,
  rig,
  run,
  session,
  study,
} from '@/db/schema';
import { moveSession } from '@/lib/server/sessions/move-session';
import {
  acting,
  DAY,
  type FreshLab,
  freshLab,
  HOUR,
  joinLab,
  MINUTE,
  MONDAY,
  openTestDatabase,
  plus,
} from '../setup/fresh-lab';
import { type CalendarRow, calendarOf, laidOutStudy } from '../setup/fresh-study';

const { db, close } = openTestDatabase();
afterAll(close);

let lab: FreshLab;
let studyId: string;
beforeAll(async () => {
  lab = await freshLab(db, { capacity: 1 });
  ({ studyId } = await laidOutStudy(db, lab));
});

const rows = () => calendarOf(db, studyId);
const kind = (r: CalendarRow) => r.visits[0]!.kind;
const lastOf = async (of: 'set dose' | 'collect') =>
  (await rows()).findLast((r) => kind(r) === of)!;
const move = (
  row: CalendarRow,
  startsAt: Date,
  over: { personId?: string; revision?: number } = {},
  context = acting(db, lab.people.investigator),
) =>
  moveSession(context, {
    sessionId: row.session.id,
    revision: row.session.revision,
    startsAt: startsAt.toISOString(),
    ...over,
  });
const refused = async (attempt: Promise<unknown>, why: RegExp, code = 'not-possible') => {
  // It may be refused before the rows are read: that is expected, not unhandled.
  attempt.catch(() => {});
  const before = await rows();
  await expect(attempt).rejects.toMatchObject({ code });
  await expect(attempt).rejects.toThrow(why);
  expect(await rows()).toEqual(before);
};

describe('a move is refused, with the reason,', () => {
  test('when the person is at another session then', async () => {
    const collect = await lastOf('collect');
    const other = (await rows())[0]!;
    const spare = await joinLab(db, lab, 'technician', 'Rosa Second');
    await db
      .update(session)
      .set({
        startsAt: plus(collect.session.startsAt, 60 * MINUTE),
        endsAt: plus(collect.session.endsAt, 60 * MINUTE),
        personId: spare.userId,
      })
      .where(eq(session.id, other.session.id));
    const at = plus(collect.session.startsAt, 55 * MINUTE);
    await refused(
      move(collect, at, { personId: spare.userId }),
      /Rosa Second is at another session/,
    );
    const { startsAt, endsAt, personId } = other.session;
    await db
      .update(session)
      .set({ startsAt, endsAt, personId })
      .where(eq(session.id, other.session.id));
  });

  test('when the person is away, or the lab is closed', async () => {
    const collect = await lastOf('collect');
    const at = plus(collect.session.startsAt, 30 * MINUTE);
    const name = Object.values(lab.people).find((p) => p.userId === collect.session.personId)!.name;
    const away = (userId: string | null) => ({
      id: uuid(),
      labId: lab.labId,
      userId,
      from: plus(at, -5 * MINUTE),
      to: plus(at, HOUR),
      reason: 'dentist',
    });
    await db.insert(absence).values(away(collect.session.personId));
    await refused(move(collect, at), new RegExp(`${name} is away`));
    await db.delete(absence).where(eq(absence.labId, lab.labId));
    await db.insert(absence).values(away(null));
    await refused(move(collect, at), /The lab is closed/);
    await db.delete(absence).where(eq(absence.labId, lab.labId));
  });

  test('when the rig holds another run then', async () => {
    const set = await lastOf('set dose');
    const [own] = await db.select().from(run).where(eq(run.id, set.run.id));
    const stranger = { ...own!, id: uuid(), number: 99 };
    await db.insert(run).values(stranger);
    const at = plus(set.booking.to, HOUR);
    await db.insert(booking).values({
      id: uuid(),
      labId: lab.labId,
      rigId: lab.rigId,
      runId: stranger.id,
      from: at,
      to: plus(at, 5 * HOUR),
    });
    await refused(move(set, plus(at, HOUR)), /Vessel A holds another run/);
    await db.delete(booking).where(eq(booking.runId, stranger.id));
    await db.delete(run).where(eq(run.id, stranger.id));
  });

  test('when it lies outside the visit’s window', async () => {
    const collect = await lastOf('collect');
    const { earliest, latest } = collect.visits[0]!;
    await refused(move(collect, plus(earliest, -10 * MINUTE)), /Outside the visit's window/);
    await refused(move(collect, plus(latest, 10 * MINUTE)), /Outside the visit's window/);
  });

  test('when the person would rest too little', async () => {
    const collect = await lastOf('collect');
    const who = collect.session.personId;
    await db.update(membership).set({ minRestHours: 11 }).where(eq(membership.userId, who));
    const other = (await rows()).find((r) => r.session.personId === who && r !== collect)!;
    // The evening before, so that only a night lies between the two.
    const evening = new Date('2027-01-18T22:30:00Z');
    const { startsAt, endsAt } = other.session;
    await db
      .update(session)
      .set({ startsAt: evening, endsAt: plus(evening, 15 * MINUTE) })
      .where(eq(session.id, other.session.id));
    const set = await lastOf('set dose');
    const shift = +new Date('2027-01-19T05:00:00Z') - +collect.session.startsAt;
    await refused(move(set, plus(set.session.startsAt, shift)), /would rest only .* 11 h are due/);
    await db.update(session).set({ startsAt, endsAt }).where(eq(session.id, other.session.id));
    await db.update(membership).set({ minRestHours: null }).where(eq(membership.userId, who));
  });

  test('when the time has passed or the approval ends before it', async () => {
    const set = await lastOf('set dose');
    await refused(move(set, plus(MONDAY, -HOUR)), /has passed/);
    await db
      .update(study)
      .set({ approvalExpires: plus(set.session.startsAt, 2 * DAY) })
      .where(eq(study.id, studyId));
    await refused(move(set, plus(set.session.startsAt, 2 * DAY)), /approval/);
    await db.update(study).set({ approvalExpires: null }).where(eq(study.id, studyId));
  });

  test('when the order of the runs of a preparation would turn round', async () => {
    const [first] = (await rows()).filter((r) => kind(r) === 'set dose');
    const last = await lastOf('collect');
    await db.update(rig).set({ capacity: 3 }).where(eq(rig.id, lab.rigId));
    await refused(move(first!, plus(last.booking.to, DAY)), /runs into the run after it/);
    await db.update(rig).set({ capacity: 1 }).where(eq(rig.id, lab.rigId));
  });

  test('when somebody else changed it first, naming who', async () => {
    const collect = await lastOf('collect');
    await db
      .update(session)
      .set({ changedBy: lab.people.head.userId, revision: collect.session.revision + 1 })
      .where(eq(session.id, collect.session.id));
    await refused(
      move(collect, plus(collect.session.startsAt, 5 * MINUTE)),
      new RegExp(`${lab.people.head.name} changed this session meanwhile`),
      'conflict',
    );
  });
});

describe('a move', () => {
  test('of the session that sets the dose takes the whole run with it', async () => {
    const set = await lastOf('set dose');
    const before = (await rows()).filter((r) => r.run.id === set.run.id);
    const others = (await rows()).filter((r) => r.run.id !== set.run.id);
    // Not a whole number of seconds: windows go along to the millisecond, or the next move is refused.
    const shift = 26 * HOUR + 427;
    const done = await move(set, plus(set.session.startsAt, shift));
    expect(done.moved).toBe(before.length);
    const after = await rows();
    for (const b of before) {
      const a = after.find((r) => r.session.id === b.session.id)!;
      expect(a.session.startsAt).toEqual(plus(b.session.startsAt, shift));
      expect(a.session.sequence).toBe(b.session.sequence + 1);
      expect(a.booking.from).toEqual(plus(b.booking.from, shift));
      expect(a.booking.to).toEqual(plus(b.booking.to, shift));
      expect(a.run.plannedStart).toEqual(plus(b.run.plannedStart!, shift));
      expect(a.visits.map((v) => +v.earliest)).toEqual(b.visits.map((v) => +v.earliest + shift));
      expect(a.visits.map((v) => +v.latest)).toEqual(b.visits.map((v) => +v.latest + shift));
    }
    for (const o of others) expect(after).toContainEqual(o);
  });

  test('of any other visit moves it alone', async () => {
    const collect = await lastOf('collect');
    const before = await rows();
    await move(collect, plus(collect.visits[0]!.earliest, 20 * MINUTE));
    const after = await rows();
    const changed = after.filter((a) => {
      const b = before.find((r) => r.session.id === a.session.id)!;
      return +b.session.startsAt !== +a.session.startsAt;
    });
    expect(changed.map((r) => r.session.id)).toEqual([collect.session.id]);
    expect(changed[0]!.booking).toEqual(collect.booking);
  });

  test('to another person tells both, and stands on the trail', async () => {
    const set = await lastOf('set dose');
    const to = await joinLab(db, lab, 'technician', 'Nils Newcomer');
    await move(set, set.session.startsAt, { personId: to.userId }, acting(db, lab.people.head));
    const mails = await db.select().from(outbox).where(eq(outbox.sessionId, set.session.id));
    const live = mails.filter((m) => m.state === 'waiting');
    const told = live.filter((m) => m.kind !== 'reminder').map((m) => [m.kind, m.recipientId]);
    expect(told).toContainEqual(['assigned', to.userId]);
    expect(told).toContainEqual(['moved', set.session.personId]);
    const reminded = live.filter((m) => m.kind === 'reminder').map((m) => m.recipientId);
    expect(new Set(reminded)).toEqual(new Set([to.userId]));
    const trail = await db
      .select()
      .from(auditEvent)
      .where(eq(auditEvent.subjectId, set.session.id));
    expect(trail.map((t) => t.event)).toContain('session.assigned');
  });

  test('of a run that lasts two months is possible', async () => {
    const slow = await freshLab(db, { capacity: 1 });
    const wanted = { timeUnit: 'd', settleCapMinutes: 20 * 1440, recordCapMinutes: 40 * 1440 };
    const about = await laidOutStudy(db, slow, { ...wanted, levels: 1 });
    const set = about.rows.findLast((r) => kind(r) === 'set dose')!;
    expect(+set.booking.to - +set.booking.from).toBeGreaterThan(45 * DAY);
    const by = acting(db, slow.people.investigator);
    const done = await move(set, plus(set.session.startsAt, 6 * DAY), {}, by);
    expect(done.moved).toBeGreaterThan(10);
  });
});

describe('a technician', () => {
  const own = () => acting(db, lab.people.technician, MONDAY, 'own');
  test('moves own visits between their earliest and latest, and nothing else', async () => {
    const collect = await lastOf('collect');
    const mine = { personId: lab.people.technician.userId };
    await db.update(session).set(mine).where(eq(session.id, collect.session.id));
    const { earliest, latest } = collect.visits[0]!;
    await move(collect, plus(earliest, 35 * MINUTE), {}, own());
    const again = await lastOf('collect');
    expect(again.session.startsAt).toEqual(plus(earliest, 35 * MINUTE));
    await refused(move(again, plus(latest, MINUTE), {}, own()), /window/);
    const give = { personId: lab.people.investigator.userId };
    await refused(move(again, earliest, give, own()), /own visits only/, 'forbidden');
    await db.update(session).set(give).where(eq(session.id, again.session.id));
    const theirs = await lastOf('collect');
    await refused(move(theirs, earliest, {}, own()), /own visits only/, 'forbidden');
  });

  test('does not move the setting of a dose, which moves its whole run', async () => {
    const set = await lastOf('set dose');
    const mine = { personId: lab.people.technician.userId };
    await db.update(session).set(mine).where(eq(session.id, set.session.id));
    const again = await lastOf('set dose');
    await refused(
      move(again, plus(again.session.startsAt, HOUR), {}, own()),
      /whole run/,
      'forbidden',
    );
  });
});
