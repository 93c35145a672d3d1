import type { ReactNode } from 'react';
import { SignalLine, type Station } from './signal-line';

type PageHeadProps = {
  title: ReactNode;
  /** one line in the second ink beside the title */
  subtitle?: ReactNode;
  /** keys at the right */
  actions?: ReactNode;
};

/** Title of a page, 28/36, with its line beside it. */
export function PageHead({ title, subtitle, actions }: PageHeadProps) {
  return (
    <div className="flex flex-wrap items-baseline gap-x-4 gap-y-1">
      <h1 className="text-title font-semibold tracking-[-0.01em]">{title}</h1>
      {subtitle ? <p className="text-body text-ink2">{subtitle}</p> : null}
      {actions ? <div className="ml-auto flex flex-wrap gap-3 self-center">{actions}</div> : null}
    </div>
  );
}

/** Head of a study: title, then the signal line of its seven stations. */
export function StudyHead({ stations, ...head }: PageHeadProps & { stations: Station[] }) {
  return (
    <div className="mb-4">
      <PageHead {...head} />
      <SignalLine stations={stations} />
    </div>
  );
}
