import { eq } from 'drizzle-orm';
import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { absence, auditEvent, membership, rig, user, workingHours } from '@/db/schema';
import { addPerson } from '@/lib/server/lab/add-person';
import { changeMembership } from '@/lib/server/lab/change-membership';
import { addAbsence, addHours, removeAbsence, removeHours } from '@/lib/server/lab/hours';
import { saveRig } from '@/lib/server/lab/save-rig';
import { memberOf } from '@/lib/server/member';
import { limitAttempts } from '@/lib/server/rate-limit';
import { acting, type FreshLab, freshLab, MONDAY, openTestDatabase } from '../setup/fresh-lab';

const { db, close } = openTestDatabase();
afterAll(close);
let lab: FreshLab;
beforeAll(async () => {
  lab = await freshLab(db);
});
const head = () => acting(db, lab.people.head);
const trailOf = async (id: string) =>
  (await db.select().from(auditEvent).where(eq(auditEvent.subjectId, id))).map((t) => t.event);

const person = (over = {}) => ({
  name: 'Petra New',
  email: `${uuid()}@example.org`,
  role: 'technician' as const,
  skills: ['flow rig'],
  password: 'long enough for this',
  ...over,
});
const change = (userId: string, over = {}) => ({
  userId,
  role: 'technician' as const,
  skills: [],
  maxMinutesPerDay: null,
  minRestHours: 11,
  active: true,
  ...over,
});

describe('people', () => {
  test('are taken in with a hashed password, once an address', async () => {
    const asked = person();
    const { userId } = await addPerson(head(), asked);
    const [row] = await db.select().from(user).where(eq(user.id, userId));
    expect(row?.passwordHash).toMatch(/^\$argon2id\$/);
    expect(row?.passwordHash).not.toContain(asked.password);
    await expect(addPerson(head(), asked)).rejects.toMatchObject({ code: 'conflict' });
    expect(await trailOf(userId)).toEqual(['person.changed']);
  });

  test('who leave are signed out everywhere; a changed role counts at the next request', async () => {
    const { userId } = await addPerson(head(), person());
    const token = { userId, version: 1 };
    expect(await memberOf(db, token)).toMatchObject({ role: 'technician', labId: lab.labId });
    await changeMembership(head(), change(userId, { role: 'observer' }));
    expect(await memberOf(db, token)).toMatchObject({ role: 'observer' });
    await changeMembership(head(), change(userId, { active: false }));
    expect(await memberOf(db, token)).toBeNull();
    await changeMembership(head(), change(userId));
    // Back again, but the old session stays ended.
    expect(await memberOf(db, token)).toBeNull();
    expect(await memberOf(db, { userId, version: 2 })).toMatchObject({ role: 'technician' });
  });

  test('never leave a lab without a head', async () => {
    const own = await freshLab(db);
    const by = acting(db, own.people.head);
    const headId = own.people.head.userId;
    for (const over of [{ role: 'observer' }, { role: 'head', active: false }]) {
      await expect(changeMembership(by, change(headId, over))).rejects.toThrow(/only head/);
    }
    const second = await addPerson(by, person({ role: 'head' }));
    await changeMembership(by, change(headId, { role: 'investigator' }));
    const rows = await db.select().from(membership).where(eq(membership.labId, own.labId));
    expect(rows.filter((m) => m.role === 'head').map((m) => m.userId)).toEqual([second.userId]);
  });
});

describe('rigs', () => {
  const fields = {
    place: 'Room 9',
    capacity: 2,
    skills: [],
    recordsItself: false,
    retired: false,
  };
  test('have a name of their own in their lab, and keep their history when retired', async () => {
    const { rigId } = await saveRig(head(), { rigId: null, name: 'Flow 2', ...fields });
    const same = saveRig(head(), { rigId: null, name: 'Flow 2', ...fields });
    await expect(same).rejects.toMatchObject({ code: 'conflict', detail: { at: 'name' } });
    await saveRig(head(), { rigId, name: 'Flow 2', ...fields, retired: true });
    const [row] = await db.select().from(rig).where(eq(rig.id, rigId));
    expect(row).toMatchObject({ retired: true, labId: lab.labId });
    const other = await freshLab(db);
    const theirs = acting(db, other.people.head);
    await expect(
      saveRig(theirs, { rigId: null, name: 'Flow 2', ...fields }),
    ).resolves.toBeDefined();
  });
});

describe('hours and absences', () => {
  test('pressed twice stand once, and are taken away again', async () => {
    const id = uuid();
    const { userId } = lab.people.technician;
    const days: ('MO' | 'SA')[] = ['MO', 'SA'];
    const hours = { id, userId, rigId: null, days, from: '09:00', to: '14:00' };
    await addHours(head(), hours);
    await addHours(head(), hours);
    const rows = await db.select().from(workingHours).where(eq(workingHours.id, id));
    expect(rows.map((r) => r.rrule)).toEqual(['FREQ=WEEKLY;BYDAY=MO,SA']);
    await removeHours(head(), { id });
    await expect(removeHours(head(), { id })).rejects.toMatchObject({ code: 'not-found' });
  });

  test('of the whole lab are closures; instants are kept in UTC whatever offset they came with', async () => {
    const id = uuid();
    const span = { from: '2027-01-12T09:00:00+01:00', to: '2027-01-12T13:00:00+05:00' };
    await addAbsence(head(), { id, userId: null, ...span, reason: 'power cut' });
    const [row] = await db.select().from(absence).where(eq(absence.id, id));
    expect(row?.from.toISOString()).toBe('2027-01-12T08:00:00.000Z');
    expect(row?.userId).toBeNull();
    await removeAbsence(head(), { id });
    expect(await db.select().from(absence).where(eq(absence.id, id))).toEqual([]);
  });
});

test('attempts are counted in windows: so many, then none until the next window', async () => {
  const key = `test:${uuid()}`;
  const attempt = (ms: number) => limitAttempts(db, key, 3, 60_000, +MONDAY + ms);
  expect(await Promise.all([attempt(0), attempt(1), attempt(2)])).toEqual([true, true, true]);
  expect(await attempt(3)).toBe(false);
  expect(await attempt(59_999)).toBe(false);
  expect(await attempt(60_000)).toBe(true);
});
