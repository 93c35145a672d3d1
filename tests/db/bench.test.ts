import { and, eq, gt } from 'drizzle-orm';
import { afterAll, beforeEach, describe, expect, test } from 'vitest';
import {
  auditEvent,
  booking,
  outbox,
  preparation,
  reading,
  run,
  session,
  visit,
} from '@/db/schema';
import { recordVisit } from '@/lib/server/bench/record-visit';
import { reportLost } from '@/lib/server/bench/report-lost';
import { startSession } from '@/lib/server/bench/start-session';
import { undoVisit } from '@/lib/server/bench/undo-visit';
import { pressStop } from '@/lib/server/stops/press-stop';
import { acting, freshLab, HOUR, MINUTE, openTestDatabase, plus } from '../setup/fresh-lab';
import { type CalendarRow, calendarOf, laidOutStudy } from '../setup/fresh-study';

const { db, close } = openTestDatabase(12);
afterAll(close);

async function begin() {
  const lab = await freshLab(db);
  return { lab, ...(await laidOutStudy(db, lab, { replicates: 2, levels: 2 })) };
}
let of: Awaited<ReturnType<typeof begin>>;
let first: CalendarRow;
beforeEach(async () => {
  of = await begin();
  first = of.rows.find((r) => r.visits.some((v) => v.kind === 'set dose'))!;
});

const by = (now: Date) => acting(db, of.lab.people.technician, now);
const start = (row: CalendarRow, at: Date) =>
  startSession(by(at), { sessionId: row.session.id, at: at.toISOString() });
const record = (
  row: CalendarRow,
  at: Date,
  over: Partial<Parameters<typeof recordVisit>[1]> = {},
) =>
  recordVisit(by(at), {
    sessionId: row.session.id,
    visitId: row.visits[0]!.id,
    at: at.toISOString(),
    outcome: 'done',
    remark: '',
    dose: row.visits[0]!.kind === 'set dose' ? row.run.dose : null,
    values: [],
    ...over,
  });
async function set(row: CalendarRow, at = row.session.startsAt, dose = row.run.dose) {
  await start(row, at);
  return record(row, at, { dose });
}
const runOf = async (id: string) => (await db.select().from(run).where(eq(run.id, id)))[0]!;
const bookingOf = async (runId: string) =>
  (await db.select().from(booking).where(eq(booking.runId, runId)))[0]!;
const visitsOf = (runId: string) => db.select().from(visit).where(eq(visit.runId, runId));
const sessionOf = async (id: string) =>
  (await db.select().from(session).where(eq(session.id, id)))[0]!;
const next = (row: CalendarRow, kind: 'set dose' | 'collect') =>
  of.rows.find(
    (r) =>
      r.run.preparationId === row.run.preparationId &&
      r.session.startsAt > row.session.startsAt &&
      r.visits.some((v) => v.kind === kind),
  )!;

describe('reading the dose back', () => {
  test('above the ceiling is refused, and nothing is set', async () => {
    await start(first, first.session.startsAt);
    // A plan near the ceiling: a slip of less than a tenth would pass it.
    await db.update(run).set({ dose: 2.7 }).where(eq(run.id, first.run.id));
    const refused = record(first, first.session.startsAt, { dose: 2.81 });
    await expect(refused).rejects.toMatchObject({ code: 'not-possible', detail: { at: 'dose' } });
    await expect(refused).rejects.toThrow('2.81 mL/h lies above the ceiling of 2.8 mL/h.');
    expect(await runOf(first.run.id)).toMatchObject({ state: 'planned', setAt: null });
    expect((await visitsOf(first.run.id)).every((v) => v.doneAt === null)).toBe(true);
    await record(first, first.session.startsAt, { dose: 2.8 });
    expect(await runOf(first.run.id)).toMatchObject({ state: 'settling', deliveredDose: 2.8 });
  });

  test('more than the largest step above what this preparation has is refused', async () => {
    await set(first);
    const later = next(first, 'set dose');
    await start(later, later.session.startsAt);
    const had = (await runOf(first.run.id)).deliveredDose!;
    await db
      .update(run)
      .set({ dose: had + 0.52 })
      .where(eq(run.id, later.run.id));
    const refused = record(later, later.session.startsAt, { dose: had + 0.501 });
    await expect(refused).rejects.toThrow(/more than the largest step of 0.5 mL\/h/);
    await record(later, later.session.startsAt, { dose: had + 0.5 });
  });

  test('more than a tenth away from the plan is refused, a tenth is not', async () => {
    await start(first, first.session.startsAt);
    const { dose } = first.run;
    for (const wrong of [dose * 1.101, dose * 0.899]) {
      await expect(record(first, first.session.startsAt, { dose: wrong })).rejects.toThrow(
        /more than a tenth away/,
      );
    }
    await record(first, first.session.startsAt, { dose: dose * 1.099 });
    const row = await runOf(first.run.id);
    expect(row.deliveredDose).toBeCloseTo(dose * 1.099, 12);
    expect(row.dose).toBe(dose);
  });

  test('is asked for: neither a blank nor a skip sets a dose', async () => {
    await start(first, first.session.startsAt);
    const at = first.session.startsAt;
    await expect(record(first, at, { dose: null })).rejects.toMatchObject({
      code: 'invalid-input',
    });
    const skip = record(first, at, { outcome: 'skipped', remark: 'no time' });
    await expect(skip).rejects.toMatchObject({ code: 'not-possible' });
  });
});

describe('the setting', () => {
  test('takes the windows of the run’s visits and its hold of the rig with it', async () => {
    const before = await visitsOf(first.run.id);
    const late = 25 * MINUTE;
    await set(first, plus(first.session.startsAt, late));
    for (const v of await visitsOf(first.run.id)) {
      const planned = before.find((b) => b.id === v.id)!;
      expect(+v.earliest).toBe(+plus(planned.earliest, late));
      expect(+v.latest).toBe(+plus(planned.latest, late));
    }
    const held = await bookingOf(first.run.id);
    expect([held.from, held.to]).toEqual([
      plus(first.booking.from, late),
      plus(first.booking.to, late),
    ]);
    // Planned and actual times are both kept.
    const row = await runOf(first.run.id);
    expect(row.setAt).toEqual(plus(first.session.startsAt, late));
    expect(row.plannedStart).toEqual(first.run.plannedStart);
  });

  test('comes before everything else of its run, and its session before it', async () => {
    const collect = next(first, 'collect');
    await expect(record(first, first.session.startsAt)).rejects.toThrow(/Start it first|planned/);
    await start(collect, collect.session.startsAt);
    await expect(record(collect, collect.session.startsAt)).rejects.toThrow(/has not been set yet/);
  });

  test('of a clock that cannot be right is refused', async () => {
    const at = first.session.startsAt;
    await start(first, at);
    for (const wrong of [plus(at, 3 * MINUTE), plus(at, -15 * 24 * HOUR)]) {
      await expect(record(first, at, { at: wrong.toISOString() })).rejects.toThrow(/clock/);
    }
  });
});

describe('taking a press back', () => {
  test('within a minute puts run, windows and rig back as planned; a second setting shifts once', async () => {
    const before = await visitsOf(first.run.id);
    const at = plus(first.session.startsAt, 10 * MINUTE);
    await set(first, at);
    const press = { sessionId: first.session.id, visitId: first.visits[0]!.id };
    await undoVisit(by(plus(at, 59_000)), press);
    expect(await runOf(first.run.id)).toMatchObject({
      state: 'planned',
      setAt: null,
      deliveredDose: null,
    });
    expect(await visitsOf(first.run.id)).toEqual(before);
    const { from, to, state } = await bookingOf(first.run.id);
    expect({ from, to, state }).toEqual({
      from: first.booking.from,
      to: first.booking.to,
      state: 'held',
    });
    expect(await sessionOf(first.session.id)).toMatchObject({ state: 'started' });
    const again = plus(at, 2 * MINUTE);
    await record(first, again);
    const [v] = await visitsOf(first.run.id);
    const planned = before.find((b) => b.id === v!.id)!;
    expect(+v!.latest).toBe(+plus(planned.latest, 12 * MINUTE));
  });

  test('after the minute, or by somebody else, is refused', async () => {
    const at = first.session.startsAt;
    await set(first, at);
    const press = { sessionId: first.session.id, visitId: first.visits[0]!.id };
    await expect(undoVisit(by(plus(at, 66_000)), press)).rejects.toMatchObject({
      code: 'forbidden',
    });
    const other = acting(db, of.lab.people.investigator, plus(at, 5000));
    await expect(undoVisit(other, press)).rejects.toMatchObject({ code: 'forbidden' });
    expect((await runOf(first.run.id)).setAt).toEqual(at);
  });

  test('keeps the press and its undoing on the trail', async () => {
    const at = first.session.startsAt;
    await set(first, at);
    await undoVisit(by(plus(at, 5000)), {
      sessionId: first.session.id,
      visitId: first.visits[0]!.id,
    });
    const trail = await db
      .select()
      .from(auditEvent)
      .where(eq(auditEvent.subjectId, first.visits[0]!.id));
    expect(trail.map((t) => t.data.undone ?? false).sort()).toEqual([false, true]);
  });

  test('brings nothing back to life that was lost or stopped meanwhile', async () => {
    const at = first.session.startsAt;
    await set(first, at);
    const press = { sessionId: first.session.id, visitId: first.visits[0]!.id };
    await pressStop(by(plus(at, 1000)), { studyId: of.studyId, sessionId: first.session.id });
    await expect(undoVisit(by(plus(at, 2000)), press)).rejects.toMatchObject({ code: 'conflict' });
    await reportLost(by(plus(at, 3000)), {
      sessionId: first.session.id,
      at: at.toISOString(),
      reason: 'foamed over',
    });
    await expect(undoVisit(by(plus(at, 4000)), press)).rejects.toMatchObject({ code: 'conflict' });
    expect((await runOf(first.run.id)).state).toBe('lost');
  });
});

test('a double press records once: one setting, one set of readings, one line of the trail', async () => {
  await set(first);
  const collect = next(first, 'collect');
  const at = collect.session.startsAt;
  await start(collect, at);
  const values = [{ readout: 'x', value: 1.25 }];
  const presses = await Promise.all([1, 2, 3].map(() => record(collect, at, { values })));
  expect(presses.every((p) => p.sessionDone)).toBe(true);
  const readings = await db.select().from(reading).where(eq(reading.runId, first.run.id));
  expect(readings.map((r) => [r.readout, r.value])).toEqual([['x', 1.25]]);
  // Minutes count from the setting, as measured.
  expect(readings[0]?.minutes).toBeCloseTo((+at - +first.session.startsAt) / MINUTE, 9);
  const trail = await db
    .select()
    .from(auditEvent)
    .where(and(eq(auditEvent.subjectId, collect.visits[0]!.id)));
  expect(trail).toHaveLength(1);
  expect(await runOf(first.run.id)).toMatchObject({ state: 'recorded', endedAt: at });
});

test('a lost preparation keeps its record, frees its rig and cancels what was to come', async () => {
  await set(first);
  const at = plus(first.session.startsAt, 20 * MINUTE);
  const preparationId = first.run.preparationId;
  await reportLost(by(at), {
    sessionId: first.session.id,
    at: at.toISOString(),
    reason: 'contaminated',
  });
  expect(await runOf(first.run.id)).toMatchObject({ state: 'lost', endedAt: at });
  expect((await runOf(first.run.id)).deliveredDose).toBe(first.run.dose);
  const rows = await calendarOf(db, of.studyId);
  const own = rows.filter((r) => r.run.preparationId === preparationId);
  const others = rows.filter((r) => r.run.preparationId !== preparationId);
  for (const r of own) {
    expect(r.run.state).toBe(r.run.id === first.run.id ? 'lost' : 'cancelled');
    expect(r.booking.state).toBe('released');
    expect(r.session.state).toBe(r.session.id === first.session.id ? 'done' : 'cancelled');
  }
  expect(new Set(others.map((r) => r.session.state))).toEqual(new Set(['planned']));
  expect(new Set(others.map((r) => r.booking.state))).toEqual(new Set(['held']));
  const [ended] = await db.select().from(preparation).where(eq(preparation.id, preparationId));
  expect(ended).toMatchObject({ endedAt: at, endReason: 'contaminated' });
  // No reminder of a cancelled session is left to be sent.
  for (const r of own) {
    const waiting = and(eq(outbox.sessionId, r.session.id), eq(outbox.state, 'waiting'));
    const left = await db
      .select()
      .from(outbox)
      .where(and(waiting, eq(outbox.kind, 'reminder'), gt(outbox.dueAt, at)));
    expect(left).toEqual([]);
  }
});

test('presses at the bench and a stop at the same moment wait for each other', async () => {
  const at = first.session.startsAt;
  const starts = of.rows.map((r) =>
    start(r, at).then(
      () => 'started',
      (e: { code?: string }) => e.code,
    ),
  );
  const stop = pressStop(acting(db, of.lab.people.observer, at), { studyId: of.studyId });
  const [stopped, ...outcomes] = await Promise.all([stop, ...starts]);
  expect(stopped).toHaveProperty('stopId');
  expect(outcomes.filter((o) => o !== 'started' && o !== 'conflict')).toEqual([]);
  const after = await calendarOf(db, of.studyId);
  expect(new Set(after.map((r) => r.session.state))).toEqual(new Set(['suspended']));
});
