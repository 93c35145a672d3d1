import type { ReactNode } from 'react';

type FindingProps = {
  /** the finding as a sentence */
  title: ReactNode;
  children?: ReactNode;
  /** what would settle or follow, in the second ink */
  next?: ReactNode;
  /** one filled key, others outlined */
  actions?: ReactNode;
};

/** A bracketed interval stays on one line, with the mark that follows it. */
function together(title: ReactNode): ReactNode {
  if (typeof title !== 'string') return title;
  const parts = [...title.matchAll(/\([^()]{1,24}\)[.,;:]?|[^(]+|\(/g)];
  return parts.map(({ 0: part, index }) => (
    <span key={index} className={/^\(.+\)/.test(part) ? 'whitespace-nowrap' : undefined}>
      {part}
    </span>
  ));
}

/** What was found, as a sentence, with what to do about it. */
export function Finding({ title, children, next, actions }: FindingProps) {
  return (
    <section className="max-w-[640px] min-w-0 desk:w-96 desk:shrink-0">
      <h2 className="pt-0.5 text-finding font-semibold">{together(title)}</h2>
      {children ? <div className="mt-[11px] text-body">{children}</div> : null}
      {next ? <div className="mt-3 text-body text-ink2">{next}</div> : null}
      {actions ? <div className="mt-[18px] flex flex-wrap gap-3">{actions}</div> : null}
    </section>
  );
}

/** Finding beside its table; above it on a tablet. */
export function FindingAndTable({ finding, table }: { finding: ReactNode; table: ReactNode }) {
  return (
    <div className="mt-6 flex flex-col gap-6 desk:flex-row desk:items-start">
      {finding}
      <div className="min-w-0 flex-1">{table}</div>
    </div>
  );
}
