'use server';

import { cookies } from 'next/headers';
import { redirect } from 'next/navigation';

/** Forgets the session on this device. */
export async function signOut(): Promise<void> {
  const jar = await cookies();
  for (const name of ['next-auth.session-token', '__Secure-next-auth.session-token']) {
    jar.delete(name);
  }
  redirect('/sign-in');
}
