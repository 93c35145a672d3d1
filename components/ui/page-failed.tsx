'use client';

import { useEffect } from 'react';
import { Key } from './key';
import { FailedState } from './states';

/** What an error page is given: the error, and the way to draw the page anew. */
export type PageErrorProps = { error: unknown; retry: () => void };

/** The reference under which the server has written the error down. */
function referenceOf(error: unknown): string | null {
  if (typeof error !== 'object' || error === null || !('digest' in error)) return null;
  return typeof error.digest === 'string' ? error.digest : null;
}

/** A page that could not be drawn: what is safe, the reference to tell, one key. */
export function PageFailed({ error, retry }: PageErrorProps) {
  useEffect(() => console.error(error), [error]);
  const reference = referenceOf(error);
  return (
    <>
      <h1 className="sr-only">Failed</h1>
      <FailedState
        title="This page could not be shown"
        safe="Everything that was saved is safe, and nothing was changed by this."
        action={
          <Key kind="filled" onClick={() => retry()}>
            Try again
          </Key>
        }
      >
        <p>
          {reference
            ? `Something failed on the server. If it fails again, tell whoever looks after the server this reference: ${reference}.`
            : 'Something failed while it was drawn. If it fails again, load the page anew.'}
        </p>
      </FailedState>
    </>
  );
}
