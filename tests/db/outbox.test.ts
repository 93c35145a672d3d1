import { and, eq, inArray } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { outbox, session } from '@/db/schema';
import { deliverNext, messageIdOf } from '@/lib/server/outbox/deliver';
import { queueNotice, queueReminders } from '@/lib/server/outbox/enqueue';
import { moveSession } from '@/lib/server/sessions/move-session';
import { pressStop } from '@/lib/server/stops/press-stop';
import {
  acting,
  DAY,
  type FreshLab,
  freshLab,
  HOUR,
  MONDAY,
  openTestDatabase,
  plus,
} from '../setup/fresh-lab';
import { type CalendarRow, laidOutStudy } from '../setup/fresh-study';
import { startMailFake } from './mail-fake';

const { db, close } = openTestDatabase();
let lab: FreshLab;
let studyId: string;
let rows: CalendarRow[];
let fake: Awaited<ReturnType<typeof startMailFake>>;

beforeAll(async () => {
  lab = await freshLab(db);
  ({ studyId, rows } = await laidOutStudy(db, lab));
  fake = await startMailFake();
});
afterAll(async () => {
  await fake.stop();
  await close();
});
beforeEach(async () => {
  // Rows of other tests are nobody's news here: the outbox is one for all labs of a database.
  await db.update(outbox).set({ state: 'dead' }).where(eq(outbox.state, 'waiting'));
  fake.mails.length = 0;
});

const notice = (slot: string, over: Partial<Parameters<typeof queueNotice>[1]> = {}) => ({
  labId: lab.labId,
  kind: 'approved' as const,
  slot,
  recipientId: lab.people.investigator.userId,
  studyId,
  data: { by: 'Head', said: 'version 1' },
  now: MONDAY,
  ...over,
});
const reminderOf = (s: CalendarRow['session'], now = MONDAY, sequence = s.sequence) => ({
  labId: lab.labId,
  studyId,
  sessionId: s.id,
  personId: s.personId,
  startsAt: s.startsAt,
  sequence,
  now,
});
const rowOf = async (slot: string) =>
  (await db.select().from(outbox).where(eq(outbox.slot, slot)))[0];

async function deliverAll(now: Date, transport = fake.transport) {
  const outcomes: string[] = [];
  for (let i = 0; i < 200; i += 1) {
    const outcome = await deliverNext(db, transport, now);
    if (outcome === 'idle') return outcomes;
    outcomes.push(outcome);
  }
  throw new Error('the outbox does not come to rest');
}

describe('a slot', () => {
  test('is one mail, however often it is written', async () => {
    await queueNotice(db, notice('twice'));
    await queueNotice(db, notice('twice', { data: { by: 'Somebody else', said: 'other' } }));
    expect(await deliverAll(MONDAY)).toEqual(['sent']);
    await queueNotice(db, notice('twice'));
    expect(await deliverAll(plus(MONDAY, HOUR))).toEqual([]);
    expect(fake.mails).toHaveLength(1);
    expect(fake.mails[0]?.text).toContain('Head approved version 1');
  });

  test('gives its mail its Message-ID, and nothing else does', async () => {
    await queueNotice(db, notice('id-1'));
    await deliverAll(MONDAY);
    expect(fake.mails[0]?.messageId).toBe(messageIdOf('id-1'));
    expect(messageIdOf('id-1')).not.toBe(messageIdOf('id-2'));
  });

  test('of a later time waits until then', async () => {
    await queueNotice(db, notice('later', { now: plus(MONDAY, HOUR) }));
    expect(await deliverAll(plus(MONDAY, HOUR - 1))).toEqual([]);
    expect(await deliverAll(plus(MONDAY, HOUR))).toEqual(['sent']);
  });
});

test('two deliverers at once send each mail once, side by side', async () => {
  const slow = await startMailFake(() => false, 25);
  const second = openTestDatabase(2);
  const slots = Array.from({ length: 12 }, (_, i) => `side-${i}`);
  for (const slot of slots) await queueNotice(db, notice(slot));
  const work = async (on: typeof db) => {
    let sent = 0;
    while ((await deliverNext(on, slow.transport, MONDAY)) === 'sent') sent += 1;
    return sent;
  };
  const [a, b] = await Promise.all([work(db), work(second.db)]);
  await second.close();
  await slow.stop();
  expect(a + b).toBe(12);
  // Neither stood behind the other's locked row.
  expect(Math.min(a, b)).toBeGreaterThan(2);
  expect(new Set(slow.mails.map((m) => m.messageId))).toEqual(new Set(slots.map(messageIdOf)));
  expect(slow.mails).toHaveLength(12);
});

describe('a reminder', () => {
  const target = () => rows.findLast((r) => r.visits.some((v) => v.kind === 'collect'))!.session;
  const fresh = async (id: string) =>
    (await db.select().from(session).where(eq(session.id, id)))[0]!;

  test('reaches the person of the session, with the appointment', async () => {
    const s = target();
    await db.delete(outbox).where(eq(outbox.sessionId, s.id));
    const early = plus(s.startsAt, -2 * HOUR);
    await queueReminders(db, reminderOf(s, early));
    expect(await deliverAll(plus(s.startsAt, -HOUR))).toEqual(['sent']);
    expect(fake.mails[0]?.ical).toContain(`UID:${s.id}@swaypoint`);
    expect(fake.mails[0]?.text).toMatch(/Europe\/Berlin \(UTC\+1\)/);
  });

  test.each([
    ['moved', { sequence: 9 }],
    ['cancelled', { state: 'cancelled' as const }],
    ['suspended', { state: 'suspended' as const }],
    ['under way', { state: 'started' as const }],
    ['somebody else’s', { personId: 'head' }],
  ])('of a session that is %s by then is never sent', async (_word, change) => {
    const s = target();
    await db.delete(outbox).where(eq(outbox.sessionId, s.id));
    await queueReminders(db, reminderOf(s, plus(s.startsAt, -2 * HOUR)));
    const personId = 'personId' in change ? lab.people.head.userId : s.personId;
    // Even where the change forgot to retire it: the session itself is asked at the last moment.
    await db
      .update(session)
      .set({ ...change, personId })
      .where(eq(session.id, s.id));
    expect(await deliverAll(plus(s.startsAt, -HOUR))).toEqual(['dead']);
    expect(fake.mails).toEqual([]);
    const { sequence, state } = s;
    await db
      .update(session)
      .set({ sequence, state, personId: s.personId })
      .where(eq(session.id, s.id));
  });

  test('is not sent once the session has begun by the clock', async () => {
    const s = target();
    await db.delete(outbox).where(eq(outbox.sessionId, s.id));
    await queueReminders(db, reminderOf(s, plus(s.startsAt, -2 * HOUR)));
    expect(await deliverAll(plus(s.startsAt, 1))).toEqual(['dead']);
    expect(fake.mails).toEqual([]);
  });

  test('dies with a move and is written anew for the new time', async () => {
    const s = target();
    await db.delete(outbox).where(eq(outbox.sessionId, s.id));
    const now = plus(s.startsAt, -2 * HOUR);
    await queueReminders(db, reminderOf(s, now));
    const startsAt = plus(s.startsAt, HOUR);
    const { revision } = await fresh(s.id);
    await moveSession(acting(db, lab.people.investigator, now), {
      sessionId: s.id,
      revision,
      startsAt: startsAt.toISOString(),
    });
    const after = await fresh(s.id);
    const reminders = await db
      .select()
      .from(outbox)
      .where(and(eq(outbox.sessionId, s.id), eq(outbox.kind, 'reminder')));
    const live = reminders.filter((r) => r.state === 'waiting');
    expect(live.map((r) => [r.sequence, +r.dueAt])).toEqual([
      [after.sequence, +plus(startsAt, -HOUR)],
    ]);
    expect(reminders.filter((r) => r.state === 'dead')).not.toEqual([]);
    rows.find((r) => r.session.id === s.id)!.session = after;
  });

  test('waits for whoever is changing its session, and neither stands in the other’s way', async () => {
    const s = target();
    await db.delete(outbox).where(eq(outbox.sessionId, s.id));
    await queueReminders(db, reminderOf(s, plus(s.startsAt, -2 * HOUR)));
    const due = plus(s.startsAt, -HOUR);
    await db.transaction(async (tx) => {
      await tx.select().from(session).where(eq(session.id, s.id)).for('update');
      expect(await deliverNext(db, fake.transport, due)).toBe('later');
      expect(fake.mails).toEqual([]);
      await tx.update(session).set({ state: 'cancelled' }).where(eq(session.id, s.id));
    });
    expect(await deliverAll(plus(due, HOUR / 2))).toEqual(['dead']);
    expect(fake.mails).toEqual([]);
    await db.update(session).set({ state: 'planned' }).where(eq(session.id, s.id));
  });

  test('dies with a stop', async () => {
    const own = await freshLab(db);
    const about = await laidOutStudy(db, own);
    const waiting = and(eq(outbox.labId, own.labId), eq(outbox.kind, 'reminder'));
    const before = await db.select().from(outbox).where(waiting);
    expect(before.filter((r) => r.state === 'waiting')).not.toEqual([]);
    await pressStop(acting(db, own.people.observer), { studyId: about.studyId });
    const after = await db.select().from(outbox).where(waiting);
    expect(after.filter((r) => r.state === 'waiting')).toEqual([]);
  });
});

test('a mail server that refuses is tried again later each time, with the same Message-ID', async () => {
  let refusing = true;
  const sour = await startMailFake(() => refusing);
  await queueNotice(db, notice('sour'));
  const waits: number[] = [];
  let now = MONDAY;
  for (let i = 0; i < 3; i += 1) {
    expect(await deliverNext(db, sour.transport, now)).toBe('later');
    const row = (await rowOf('sour'))!;
    expect(row).toMatchObject({ state: 'waiting', attempts: i + 1 });
    expect(row.error).toMatch(/451|try later/);
    expect(await deliverNext(db, sour.transport, plus(row.dueAt, -1))).toBe('idle');
    waits.push(+row.dueAt - +now);
    now = row.dueAt;
  }
  expect(waits[1]).toBe(2 * waits[0]!);
  expect(waits[2]).toBe(4 * waits[0]!);
  refusing = false;
  expect(await deliverNext(db, sour.transport, now)).toBe('sent');
  await sour.stop();
  const ids = [...sour.refused, ...sour.mails.map((m) => m.messageId)];
  expect(ids).toHaveLength(4);
  expect(new Set(ids)).toEqual(new Set([messageIdOf('sour')]));
});

test('a mail that nobody takes is given up after twelve tries, on the record', async () => {
  const sour = await startMailFake(() => true);
  await queueNotice(db, notice('hopeless'));
  await db.update(outbox).set({ attempts: 11 }).where(eq(outbox.slot, 'hopeless'));
  expect(await deliverNext(db, sour.transport, MONDAY)).toBe('dead');
  await sour.stop();
  expect(await rowOf('hopeless')).toMatchObject({ state: 'dead', attempts: 12 });
});

test('a mail server that is away holds nothing up and loses nothing', async () => {
  const gone = await startMailFake();
  await gone.stop();
  await queueNotice(db, notice('away'));
  expect(await deliverNext(db, gone.transport, MONDAY)).toBe('later');
  expect(await rowOf('away')).toMatchObject({ state: 'waiting', attempts: 1 });
});

test('a mail stands or falls with the change that it tells of', async () => {
  const fails = db.transaction(async (tx) => {
    await queueNotice(tx, notice('undone'));
    expect(await tx.select().from(outbox).where(eq(outbox.slot, 'undone'))).toHaveLength(1);
    throw new Error('the change failed');
  });
  await expect(fails).rejects.toThrow('the change failed');
  expect(await rowOf('undone')).toBeUndefined();
  // A refused move leaves neither mails nor reminders behind.
  const [first] = rows;
  const slots = async () =>
    (
      await db
        .select({ slot: outbox.slot })
        .from(outbox)
        .where(inArray(outbox.sessionId, [first!.session.id]))
    ).length;
  const before = await slots();
  const refused = moveSession(acting(db, lab.people.investigator), {
    sessionId: first!.session.id,
    revision: 999,
    startsAt: plus(MONDAY, 2 * DAY).toISOString(),
  });
  await expect(refused).rejects.toMatchObject({ code: 'conflict' });
  expect(await slots()).toBe(before);
});
