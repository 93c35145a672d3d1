import clsx from 'clsx';
import type { ReactNode } from 'react';

export type FieldProps = {
  /** also the stem of the ids of hint and problem */
  id: string;
  label: ReactNode;
  hint?: ReactNode;
  /** what is wrong with this field and how to mend it */
  problem?: ReactNode;
  optional?: boolean;
  className?: string;
};

/** ids that tie a control to its hint and its problem. */
export function describedBy({ id, hint, problem }: Pick<FieldProps, 'id' | 'hint' | 'problem'>) {
  const ids = [hint ? `${id}-hint` : null, problem ? `${id}-problem` : null].filter(Boolean);
  return {
    'aria-describedby': ids.length > 0 ? ids.join(' ') : undefined,
    'aria-invalid': problem ? (true as const) : undefined,
  };
}

/** Label above, control, then hint and problem beneath. */
export function Field(props: FieldProps & { children: ReactNode }) {
  const { id, label, hint, problem, optional, className, children } = props;
  return (
    <div className={clsx('flex min-w-0 flex-col gap-1', className)}>
      <label htmlFor={id} className="text-caption font-semibold">
        {label}
        {optional ? <span className="font-normal text-ink2"> (optional)</span> : null}
      </label>
      {children}
      <FieldNotes id={id} hint={hint} problem={problem} />
    </div>
  );
}

export function FieldNotes({ id, hint, problem }: Pick<FieldProps, 'id' | 'hint' | 'problem'>) {
  return (
    <>
      {hint ? (
        <p id={`${id}-hint`} className="text-caption text-ink2">
          {hint}
        </p>
      ) : null}
      {problem ? (
        <p
          id={`${id}-problem`}
          className="border-l-[3px] border-ink pl-2 text-caption font-semibold"
        >
          {problem}
        </p>
      ) : null}
    </>
  );
}

/** Outline of a field: edge, and two px of ink where it is active or wrong. */
export const controlClass =
  'min-h-10 w-full min-w-0 rounded-key border border-edge bg-paper px-3 py-2 text-body text-ink placeholder:text-ink2 hover:border-ink focus:border-ink disabled:border-dashed disabled:text-ink2 aria-invalid:border-2 aria-invalid:border-ink pointer-coarse:min-h-12';
