import clsx from 'clsx';
import type { ReactNode } from 'react';
import { OpenSwitch } from './glyphs';

const TICKS = Array.from({ length: 21 }, (_, i) => ({ x: 16 + i * 14, major: i % 5 === 0 }));
const RULE = TICKS.map((t) => `M${t.x + 0.5} 36v${t.major ? 7 : 4}`).join('');

/** The dial at rest: a flat line over its scale. */
function DialAtRest({ pointer }: { pointer: boolean }) {
  return (
    <svg width={313} height={48} viewBox="0 0 313 48" aria-hidden="true" className="max-w-full">
      <path d="M16 18H297" stroke="var(--edge)" strokeWidth={2} />
      <path d={`M16 36H297${RULE}`} stroke="var(--ink)" fill="none" />
      {pointer ? (
        <path
          d="M11.1 3.5h10.8l-5.4 9Z"
          fill="var(--plate)"
          stroke="var(--ink)"
          strokeWidth={1.2}
        />
      ) : null}
    </svg>
  );
}

type StateProps = {
  title: ReactNode;
  children?: ReactNode;
  /** one key */
  action?: ReactNode;
  className?: string;
};

function StatePlate({
  title,
  children,
  action,
  className,
  figure,
}: StateProps & { figure: ReactNode }) {
  return (
    <section
      className={clsx('rounded-key border border-rule bg-plate px-4 py-6 tablet:px-8', className)}
    >
      {figure}
      <h2 className="mt-4 text-section font-semibold">{title}</h2>
      {children ? <div className="mt-2 max-w-[640px] text-body text-ink2">{children}</div> : null}
      {action ? <div className="mt-4 flex flex-wrap gap-3">{action}</div> : null}
    </section>
  );
}

/** Nothing here yet: the dial at rest, one sentence, one key. */
export function EmptyState(props: StateProps) {
  return <StatePlate {...props} figure={<DialAtRest pointer />} />;
}

/** Something failed: what happened, what is safe, one key. */
export function FailedState({ safe, ...props }: StateProps & { safe: ReactNode }) {
  return (
    <div role="alert">
      <StatePlate
        {...props}
        figure={
          <span className="flex items-end text-ink">
            <span className="mb-[4.75px] h-[1.5px] w-24 bg-current" />
            <OpenSwitch />
            <span className="mb-[4.75px] h-[1.5px] w-12 bg-current" />
          </span>
        }
      >
        {props.children}
        <p className="mt-2">{safe}</p>
      </StatePlate>
    </div>
  );
}

/** Not for this role: who can do it, and a key to ask them. */
export function ForbiddenState({ who, ...props }: StateProps & { who: ReactNode }) {
  return (
    <StatePlate {...props} figure={<DialAtRest pointer={false} />}>
      {props.children}
      <p>{who}</p>
    </StatePlate>
  );
}
