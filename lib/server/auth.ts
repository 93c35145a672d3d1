import { randomUUID } from 'node:crypto';
import { hash, verify } from '@node-rs/argon2';
import { eq } from 'drizzle-orm';
import type { NextAuthOptions } from 'next-auth';
import CredentialsProvider from 'next-auth/providers/credentials';
import { z } from 'zod';
import { user } from '@/db/schema';
import { database } from './database';
import { env } from './env';
import { forgetAttempts, limitAttempts } from './rate-limit';

const credentials = z.object({
  email: z.string().trim().toLowerCase().max(254),
  password: z.string().min(1).max(200),
});

/** A hash of something nobody knows: an unknown address costs the same time as a wrong password. */
let decoy: Promise<string> | undefined;
const decoyHash = () => {
  decoy ??= hash(randomUUID());
  return decoy;
};

async function signIn(raw: unknown) {
  const parsed = credentials.safeParse(raw);
  if (!parsed.success) return null;
  const { email, password } = parsed.data;
  const allowed = await limitAttempts(database(), `sign-in:${email}`, 10, 15 * 60_000);
  if (!allowed) throw new Error('too-many');
  const [found] = await database().select().from(user).where(eq(user.email, email)).limit(1);
  const matches = await verify(found?.passwordHash ?? (await decoyHash()), password).catch(
    () => false,
  );
  if (!found || !matches) return null;
  await forgetAttempts(database(), `sign-in:${email}`);
  return { id: found.id, name: found.name, email: found.email, version: found.sessionVersion };
}

export function authOptions(): NextAuthOptions {
  return {
    secret: env().NEXTAUTH_SECRET,
    session: { strategy: 'jwt', maxAge: 14 * 24 * 3600 },
    pages: { signIn: '/sign-in', error: '/sign-in' },
    providers: [
      CredentialsProvider({
        name: 'credentials',
        credentials: { email: {}, password: {} },
        authorize: signIn,
      }),
    ],
    callbacks: {
      /** The token holds who, and which session version; role and lab are read at each request. */
      jwt({ token, user: signedIn }) {
        if (signedIn) {
          token.sub = signedIn.id;
          token.version = (signedIn as { version?: number }).version ?? 0;
        }
        return token;
      },
      session({ session, token }) {
        return { ...session, userId: token.sub, version: token.version };
      },
    },
    logger: { error: () => {}, warn: () => {}, debug: () => {} },
  };
}
