'use client';

import { Logo } from '@/components/ui/glyphs';
import { type PageErrorProps, PageFailed } from '@/components/ui/page-failed';

export default function FailedPage(props: PageErrorProps) {
  return (
    <main id="content" className="mx-auto flex max-w-[640px] flex-col gap-6 px-4 py-12 tablet:px-8">
      <p className="flex items-center gap-3 text-section font-bold">
        <Logo /> Swaypoint
      </p>
      <PageFailed {...props} />
    </main>
  );
}
