import { hash } from '@node-rs/argon2';
import { v7 as uuid } from 'uuid';
import type { Conn, Db } from '../client';
import { lab, membership, rig, user, workingHours } from '../schema';
import { demoLab, demoPassword, demoPeople, demoRigs } from './people';

export { demoSignIns } from './people';

export type DemoLab = {
  labId: string;
  people: Record<string, string>;
  rigs: Record<string, string>;
};

async function insertPeople(tx: Conn, labId: string): Promise<Record<string, string>> {
  const passwordHash = await hash(demoPassword);
  const ids: Record<string, string> = {};
  for (const person of demoPeople) {
    const userId = uuid();
    ids[person.key] = userId;
    await tx
      .insert(user)
      .values({ id: userId, email: person.email, name: person.name, passwordHash });
    await tx.insert(membership).values({
      id: uuid(),
      labId,
      userId,
      role: person.role,
      skills: person.skills,
      maxMinutesPerDay: person.maxMinutesPerDay,
      minRestHours: person.hours.length > 0 ? 11 : null,
    });
    for (const hours of person.hours) {
      await tx.insert(workingHours).values({ id: uuid(), labId, userId, ...hours });
    }
  }
  return ids;
}

async function insertRigs(tx: Conn, labId: string): Promise<Record<string, string>> {
  const ids: Record<string, string> = {};
  for (const { key, ...values } of demoRigs) {
    const rigId = uuid();
    ids[key] = rigId;
    await tx.insert(rig).values({ id: rigId, labId, ...values });
  }
  return ids;
}

/**
 * The invented demo lab: its people, rigs and hours. Does nothing when any lab exists; null then.
 * `fill` adds the studies in the same transaction, so that a seed that fails leaves nothing behind.
 */
export async function seedDemoLab(
  db: Db,
  fill: (tx: Conn, demo: DemoLab) => Promise<void> = async () => {},
): Promise<{ seeded: boolean }> {
  return db.transaction(async (tx) => {
    const [existing] = await tx.select({ id: lab.id }).from(lab).limit(1);
    if (existing) return { seeded: false };
    const labId = uuid();
    await tx.insert(lab).values({ id: labId, ...demoLab, demo: true });
    const people = await insertPeople(tx, labId);
    const rigs = await insertRigs(tx, labId);
    await fill(tx, { labId, people, rigs });
    return { seeded: true };
  });
}
