'use client';

import { type PageErrorProps, PageFailed } from '@/components/ui/page-failed';
import { fontVariables } from './fonts';
import './globals.css';

/** Stands in for the root layout when that fails itself. */
export default function GlobalError(props: PageErrorProps) {
  return (
    <html lang="en" className={fontVariables}>
      <body>
        <title>Failed, Swaypoint</title>
        <main id="content" className="mx-auto max-w-[640px] px-4 py-12 tablet:px-8">
          <PageFailed {...props} />
        </main>
      </body>
    </html>
  );
}
