import clsx from 'clsx';
import type { ReactNode } from 'react';

/** Width and margins of a page: 32 px at the sides, content of 1840 at most, thumbs' height free. */
export function PageBody({ children, className }: { children: ReactNode; className?: string }) {
  return (
    <main
      id="content"
      className={clsx(
        'mx-auto w-full max-w-[1904px] px-4 pt-5 pb-24 tablet:px-8 desk:pb-12 print:p-0',
        className,
      )}
    >
      {children}
    </main>
  );
}

/** First stop of the keyboard: past the frame, to the page. */
export function SkipLink() {
  return (
    <a
      href="#content"
      className="sr-only focus:not-sr-only focus:absolute focus:z-30 focus:bg-plate focus:px-4 focus:py-2"
    >
      Skip to the page
    </a>
  );
}
