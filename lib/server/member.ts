import { and, asc, eq } from 'drizzle-orm';
import { redirect } from 'next/navigation';
import { getServerSession } from 'next-auth';
import { cache } from 'react';
import type { Db } from '@/db/client';
import { lab, membership, type Role, user } from '@/db/schema';
import { authOptions } from './auth';
import { type Action, authorise } from './authorise';
import { database } from './database';
import { AppError } from './errors';

/** Who is asking, and for which lab, as the database has it now. */
export type Member = {
  userId: string;
  name: string;
  email: string;
  role: Role;
  labId: string;
  lab: { name: string; place: string; timeZone: string; demo: boolean };
};

/** The member that a session token stands for; null when it no longer stands for anybody. */
export async function memberOf(
  db: Db,
  token: { userId?: string; version?: number },
): Promise<Member | null> {
  if (!token.userId) return null;
  const [row] = await db
    .select({ user, membership, lab })
    .from(user)
    .innerJoin(membership, and(eq(membership.userId, user.id), eq(membership.active, true)))
    .innerJoin(lab, eq(lab.id, membership.labId))
    .where(eq(user.id, token.userId))
    .orderBy(asc(membership.createdAt))
    .limit(1);
  if (!row || row.user.sessionVersion !== token.version) return null;
  const { name, place, timeZone, demo } = row.lab;
  return {
    userId: row.user.id,
    name: row.user.name,
    email: row.user.email,
    role: row.membership.role,
    labId: row.lab.id,
    lab: { name, place, timeZone, demo },
  };
}

/** The member of this request, read once a request. */
export const currentMember = cache(async (): Promise<Member | null> => {
  const session = (await getServerSession(authOptions())) as {
    userId?: string;
    version?: number;
  } | null;
  if (!session?.userId) return null;
  return memberOf(database(), session);
});

/** For pages: sends whoever is not signed in to the sign-in page. */
export async function pageMember(): Promise<Member> {
  const member = await currentMember();
  if (!member) redirect('/sign-in?why=expired');
  return member;
}

/** For actions and routes: throws instead of redirecting. */
export async function requireMember(): Promise<Member> {
  const member = await currentMember();
  if (!member) {
    throw new AppError('not-signed-in', 'Your session has ended. Nothing was saved.', {
      mend: 'Sign in again; what you typed stays on this page until you leave it.',
    });
  }
  return member;
}

export const may = (member: Member, action: Action) => authorise(member.role, action) !== 'no';
