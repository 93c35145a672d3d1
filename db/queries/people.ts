import { and, asc, eq, gte } from 'drizzle-orm';
import type { Conn } from '../client';
import { absence, membership, type Role, rig, user, workingHours } from '../schema';

/** The lab's active people with role and skills. */
export async function people(conn: Conn, of: { labId: string }) {
  return conn
    .select({
      userId: user.id,
      name: user.name,
      email: user.email,
      role: membership.role,
      skills: membership.skills,
      maxMinutesPerDay: membership.maxMinutesPerDay,
      minRestHours: membership.minRestHours,
      active: membership.active,
    })
    .from(membership)
    .innerJoin(user, eq(user.id, membership.userId))
    .where(and(eq(membership.labId, of.labId), eq(membership.active, true)))
    .orderBy(asc(user.name));
}

export async function peopleOfRole(conn: Conn, of: { labId: string; roles: Role[] }) {
  const all = await people(conn, of);
  return all.filter((p) => of.roles.includes(p.role));
}

export async function rigs(conn: Conn, of: { labId: string }) {
  return conn.select().from(rig).where(eq(rig.labId, of.labId)).orderBy(asc(rig.name));
}

/** Working hours of people (userId) and opening hours of rigs (rigId). */
export async function hoursOfLab(conn: Conn, of: { labId: string }) {
  return conn
    .select()
    .from(workingHours)
    .where(eq(workingHours.labId, of.labId))
    .orderBy(asc(workingHours.from));
}

/** Absences (userId set) and closures (userId null) that end after `since`. */
export async function absences(conn: Conn, of: { labId: string; since: Date }) {
  return conn
    .select()
    .from(absence)
    .where(and(eq(absence.labId, of.labId), gte(absence.to, of.since)))
    .orderBy(asc(absence.from));
}
