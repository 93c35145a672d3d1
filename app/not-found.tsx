import type { Metadata } from 'next';
import { Logo } from '@/components/ui';
import { PageMissing } from '@/components/ui/page-missing';

export const metadata: Metadata = { title: 'Nothing here' };

/** For addresses outside the frame; also for a session that is not this lab's. */
export default function NotFound() {
  return (
    <main id="content" className="mx-auto flex max-w-[640px] flex-col gap-6 px-4 py-12 tablet:px-8">
      <p className="flex items-center gap-3 text-section font-bold">
        <Logo /> Swaypoint
      </p>
      <PageMissing />
    </main>
  );
}
