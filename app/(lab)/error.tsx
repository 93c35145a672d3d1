'use client';

import { PageBody } from '@/components/frame/page-body';
import { type PageErrorProps, PageFailed } from '@/components/ui/page-failed';

/** The frame stays: time and places are still there when a page fails. */
export default function FailedPage(props: PageErrorProps) {
  return (
    <PageBody>
      <PageFailed {...props} />
    </PageBody>
  );
}
