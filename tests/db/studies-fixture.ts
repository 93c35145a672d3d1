import { v7 as uuid } from 'uuid';
import { type Db, openDatabase } from '@/db/client';
import { lab, membership, type Role, rig, user } from '@/db/schema';
import type { Control, SystemModel } from '@/lib/contracts';
import { env } from '@/lib/server/env';
import type { Member } from '@/lib/server/member';

export function openTestDatabase() {
  const e = env();
  return openDatabase({
    host: e.DATABASE_HOST,
    port: e.DATABASE_PORT,
    user: e.DATABASE_USER,
    password: e.DATABASE_PASSWORD,
    database: e.DATABASE_NAME,
  });
}

/** A lab of its own with one rig and one person of each role, so that tests do not meet. */
export async function newLab(db: Db, timeZone = 'Europe/Berlin') {
  const labId = uuid();
  const rigId = uuid();
  const place = { name: 'Test lab', place: 'Here', timeZone, demo: false };
  await db.insert(lab).values({ id: labId, ...place });
  await db
    .insert(rig)
    .values({ id: rigId, labId, name: 'Vessel A', place: 'Room 1', capacity: 1, skills: [] });
  const join = async (role: Role, name: string): Promise<Member> => {
    const userId = uuid();
    const email = `${userId}@example.org`;
    await db.insert(user).values({ id: userId, email, name, passwordHash: '-' });
    await db.insert(membership).values({ id: uuid(), labId, userId, role, skills: [] });
    return { userId, name, email, role, labId, lab: place };
  };
  return {
    labId,
    rigId,
    head: await join('head', 'Hanna Head'),
    investigator: await join('investigator', 'Ines Investigator'),
  };
}

/** Brusselator with A = 1: exactly one onset at B = 1 + A² (Prigogine & Lefever 1968). */
export const brusselator: SystemModel = {
  name: 'Brusselator',
  timeUnit: 's',
  variables: [
    { symbol: 'x', start: 1, nonnegative: true },
    { symbol: 'y', start: 1, nonnegative: true },
  ],
  parameters: [
    { symbol: 'A', value: 1, spread: { kind: 'lognormal', cv: 0.05 } },
    { symbol: 'B', value: 1.5, unit: '1/s' },
  ],
  equations: { x: 'A - (B + 1)*x + x^2*y', y: 'B*x - x^2*y' },
};
export const brusselatorControl: Control = { symbol: 'B', from: 1, to: 3 };

/** A study as its form sends it; the system is set by the caller. */
export function studyFields(over: Record<string, unknown> = {}) {
  return {
    id: uuid(),
    title: 'Brusselator at rising feed',
    summary: '',
    perturbs: 'chemical reaction' as const,
    rigId: null,
    doseLabel: 'Feed',
    doseUnit: 'mL/h',
    ceilingDose: 2.8,
    largestStep: 0.5,
    stopRules: 'Stop at 40 °C.',
    approvalReference: null,
    approvalExpires: null,
    ...over,
  };
}
