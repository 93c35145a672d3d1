import type { Metadata } from 'next';
import { redirect } from 'next/navigation';
import { Logo } from '@/components/ui';
import { env } from '@/lib/server/env';
import { currentMember } from '@/lib/server/member';
import { SignInForm } from './_components/sign-in-form';

export const metadata: Metadata = { title: 'Sign in' };

export default async function SignIn({
  searchParams,
}: {
  searchParams: Promise<{ why?: string }>;
}) {
  if (await currentMember()) redirect('/today');
  const { why } = await searchParams;
  return (
    <main className="mx-auto flex min-h-dvh max-w-[420px] flex-col justify-center gap-6 p-8">
      <p className="flex items-center gap-3 text-section font-bold">
        <Logo /> Swaypoint
      </p>
      <div>
        <h1 className="text-title font-bold">Sign in</h1>
        <p className="mt-1 text-ink2">
          {why === 'expired'
            ? 'Your session has ended. Sign in again to go on.'
            : 'With the address and password that your lab knows you by.'}
        </p>
      </div>
      <SignInForm />
      {env().CATCHER_URL ? (
        <p className="text-caption text-ink2">
          Mail of this installation stays on this machine and can be read at{' '}
          <a className="underline" href={env().CATCHER_URL}>
            {env().CATCHER_URL}
          </a>
          .
        </p>
      ) : null}
    </main>
  );
}
