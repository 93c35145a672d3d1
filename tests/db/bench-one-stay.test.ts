import { afterAll, beforeEach, expect, test } from 'vitest';
import { recordVisit } from '@/lib/server/bench/record-visit';
import { startSession } from '@/lib/server/bench/start-session';
import { moveSession } from '@/lib/server/sessions/move-session';
import { pressStop } from '@/lib/server/stops/press-stop';
import { acting, freshLab, HOUR, MINUTE, openTestDatabase, plus } from '../setup/fresh-lab';
import { type CalendarRow, calendarOf, laidOutStudy } from '../setup/fresh-study';

const { db, close } = openTestDatabase();
afterAll(close);

/** A rig that does not record by itself, and runs so short that somebody stays from dose to last reading. */
async function begin() {
  const lab = await freshLab(db, { recordsItself: false, capacity: 1 });
  return { lab, ...(await laidOutStudy(db, lab, { levels: 1 })) };
}
let of: Awaited<ReturnType<typeof begin>>;
beforeEach(async () => {
  of = await begin();
});

const by = (now: Date) => acting(db, of.lab.people.technician, now);
const record = ({ session, visits, run }: CalendarRow, visit: number, at: Date) =>
  recordVisit(by(at), {
    sessionId: session.id,
    visitId: visits[visit]!.id,
    at: at.toISOString(),
    outcome: 'done',
    remark: '',
    dose: visit === 0 ? run.dose : null,
    values: [],
  });
async function set(row: CalendarRow) {
  const at = row.session.startsAt;
  await startSession(by(at), { sessionId: row.session.id, at: at.toISOString() });
  return record(row, 0, at);
}
const again = async (row: CalendarRow) =>
  (await calendarOf(db, of.studyId)).find((r) => r.session.id === row.session.id)!;

test('a run of one stay is not over when its dose is set: its rig stays held, and a stop meets it', async () => {
  const row = of.rows[0]!;
  expect(row.visits.map((v) => v.kind)).toEqual(['set dose', 'collect']);
  const done = await set(row);
  expect(done.sessionDone).toBe(false);
  const going = await again(row);
  expect(going.run).toMatchObject({ state: 'settling', endedAt: null });
  expect(going.booking).toMatchObject({ state: 'held', to: row.booking.to });
  const at = plus(row.session.startsAt, MINUTE);
  await pressStop(by(at), { studyId: of.studyId, sessionId: row.session.id });
  const held = await again(row);
  expect([held.run.state, held.session.state]).toEqual(['suspended', 'suspended']);
});

test('it ends with its readings', async () => {
  const row = of.rows[0]!;
  await set(row);
  const end = plus(row.session.startsAt, row.visits[1]!.atMinutes * MINUTE);
  expect(end).toEqual(row.session.endsAt);
  const done = await record(row, 1, end);
  expect(done.sessionDone).toBe(true);
  const over = await again(row);
  expect(over.run).toMatchObject({ state: 'recorded', endedAt: end });
  expect(over.booking.state).toBe('released');
});

test('it moves like any other, both of its moments with it', async () => {
  const row = of.rows.at(-1)!;
  await moveSession(acting(db, of.lab.people.investigator), {
    sessionId: row.session.id,
    revision: row.session.revision,
    startsAt: plus(row.session.startsAt, 2 * HOUR).toISOString(),
  });
  const moved = await again(row);
  expect(moved.session.endsAt).toEqual(plus(row.session.endsAt, 2 * HOUR));
  expect(moved.visits.map((v) => +v.latest)).toEqual(row.visits.map((v) => +v.latest + 2 * HOUR));
});
