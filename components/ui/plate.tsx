import clsx from 'clsx';
import type { ReactNode } from 'react';

type PlateProps = {
  children: ReactNode;
  className?: string;
  /** heading of the plate, 18/24 */
  title?: ReactNode;
  /** keys at the right of the heading */
  actions?: ReactNode;
  id?: string;
  /** no inner space, for tables and ribbons that bring their own */
  flush?: boolean;
};

/** An enamelled plate: a panel with an engraved edge. */
export function Plate({ children, className, title, actions, id, flush }: PlateProps) {
  return (
    <section
      id={id}
      className={clsx('rounded-key border border-rule bg-plate', !flush && 'p-4', className)}
    >
      {title || actions ? (
        <div
          className={clsx('flex flex-wrap items-center gap-4', flush ? 'px-4 pt-4 pb-2' : 'mb-4')}
        >
          {title ? <h2 className="text-section font-semibold">{title}</h2> : null}
          {actions ? <div className="ml-auto flex flex-wrap gap-3">{actions}</div> : null}
        </div>
      ) : null}
      {children}
    </section>
  );
}
