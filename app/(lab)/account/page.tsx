import type { Metadata } from 'next';
import { PageBody, PageHead } from '@/components/frame';
import { Plate } from '@/components/ui';
import { pageMember } from '@/lib/server/member';
import { PasswordForm } from './_components/password-form';

export const metadata: Metadata = { title: 'Account' };

export default async function AccountPage() {
  const member = await pageMember();
  return (
    <PageBody>
      <PageHead title={member.name} subtitle={`${member.role}, ${member.lab.name}`} />
      <div className="mt-6 grid gap-6 desk:grid-cols-2">
        <Plate title="Mail">
          <p>
            Mails go to {member.email}: a reminder 24 hours and one hour before each session of
            yours, and a word when a session of yours comes, moves or goes. Stops are always told.
          </p>
        </Plate>
        <PasswordForm />
      </div>
    </PageBody>
  );
}
