import { v7 as uuid } from 'uuid';
import { type Db, openDatabase } from '@/db/client';
import { lab, membership, type Role, rig, roles, user, workingHours } from '@/db/schema';
import type { ActionContext } from '@/lib/server/action';
import { env } from '@/lib/server/env';
import type { Member } from '@/lib/server/member';

/** A Monday morning, in winter in Berlin: 09:00 there. */
export const MONDAY = new Date('2027-01-11T08:00:00Z');
export const MINUTE = 60_000;
export const HOUR = 3_600_000;
export const DAY = 86_400_000;
export const plus = (at: Date, ms: number) => new Date(at.getTime() + ms);

export function openTestDatabase(connections?: number) {
  const e = env();
  return openDatabase({
    host: e.DATABASE_HOST,
    port: e.DATABASE_PORT,
    user: e.DATABASE_USER,
    password: e.DATABASE_PASSWORD,
    database: e.DATABASE_NAME,
    ...(connections ? { connections } : {}),
  });
}

type Hours = { rrule: string; from: string; to: string };
export const ROUND_THE_CLOCK: Hours = { rrule: 'FREQ=DAILY', from: '00:00', to: '23:59' };

export type FreshLab = {
  labId: string;
  rigId: string;
  people: Record<Role, Member>;
};

/** A lab of its own with one person of each role, one rig and hours, so that tests do not meet. */
export async function freshLab(
  db: Db,
  wanted: {
    timeZone?: string;
    hours?: Hours[];
    capacity?: number;
    recordsItself?: boolean;
    minRestHours?: number;
    maxMinutesPerDay?: number;
  } = {},
): Promise<FreshLab> {
  const labId = uuid();
  const rigId = uuid();
  const timeZone = wanted.timeZone ?? 'Europe/Berlin';
  const place = { name: 'Fresh lab', place: 'Here', timeZone, demo: false };
  await db.insert(lab).values({ id: labId, ...place });
  await db.insert(rig).values({
    id: rigId,
    labId,
    name: 'Vessel A',
    place: 'Room 1',
    capacity: wanted.capacity ?? 2,
    skills: [],
    recordsItself: wanted.recordsItself ?? true,
  });
  const people = {} as Record<Role, Member>;
  for (const role of roles) {
    const userId = uuid();
    const name = `${role.charAt(0).toUpperCase()}${role.slice(1)} of ${labId.slice(-4)}`;
    const email = `${userId}@example.org`;
    await db.insert(user).values({ id: userId, email, name, passwordHash: '-' });
    await db.insert(membership).values({
      id: uuid(),
      labId,
      userId,
      role,
      skills: [],
      minRestHours: wanted.minRestHours ?? null,
      maxMinutesPerDay: wanted.maxMinutesPerDay ?? null,
    });
    if (role === 'technician' || role === 'investigator') {
      for (const hours of wanted.hours ?? [ROUND_THE_CLOCK]) {
        await db.insert(workingHours).values({ id: uuid(), labId, userId, ...hours });
      }
    }
    people[role] = { userId, name, email, role, labId, lab: place };
  }
  return { labId, rigId, people };
}

/** Another person of the lab, with hours. */
export async function joinLab(db: Db, of: FreshLab, role: Role, name: string): Promise<Member> {
  const userId = uuid();
  const email = `${userId}@example.org`;
  const { labId } = of;
  await db.insert(user).values({ id: userId, email, name, passwordHash: '-' });
  await db.insert(membership).values({ id: uuid(), labId, userId, role, skills: [] });
  await db.insert(workingHours).values({ id: uuid(), labId, userId, ...ROUND_THE_CLOCK });
  return { ...of.people.head, userId, name, email, role };
}

/** Somebody acting at `now`, with what their role allows. */
export const acting = (
  db: ActionContext['db'],
  member: Member,
  now = MONDAY,
  allowance: 'yes' | 'own' = 'yes',
): ActionContext => ({ db, member, now, allowance });
