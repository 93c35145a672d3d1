'use client';

import clsx from 'clsx';
import type { ReactNode } from 'react';
import { controlClass } from '@/components/forms';

type CellProps = {
  /** dotted path of the field; also its id */
  at: string;
  /** what it is, read out, since heads of columns stand far above */
  label: string;
  value: string;
  change: (value: string) => void;
  problem?: string;
  mono?: boolean;
  /** several lines */
  rows?: number;
  placeholder?: string;
};

/** One field of a row: its label is for ears, its problem stands beneath it. */
export function Cell(props: CellProps) {
  const { at, label, value, change, problem, mono = true, rows, placeholder } = props;
  const shared = {
    id: at,
    name: at,
    'aria-label': label,
    value,
    placeholder,
    spellCheck: false,
    autoComplete: 'off',
    'aria-invalid': problem ? (true as const) : undefined,
    'aria-describedby': problem ? `${at}-problem` : undefined,
    onChange: (event: { target: { value: string } }) => change(event.target.value),
  };
  return (
    <div className="flex min-w-0 flex-col gap-1">
      {rows ? (
        <textarea {...shared} rows={rows} className={clsx(controlClass, mono && 'font-mono')} />
      ) : (
        <input {...shared} type="text" className={clsx(controlClass, mono && 'font-mono')} />
      )}
      <CellProblem at={at} problem={problem} />
    </div>
  );
}

export function CellProblem({ at, problem }: { at: string; problem?: string }) {
  if (!problem) return null;
  return (
    <p id={`${at}-problem`} className="border-l-[3px] border-ink pl-2 text-caption font-semibold">
      {problem}
    </p>
  );
}

type SelectProps = {
  at: string;
  label: string;
  value: string;
  change: (value: string) => void;
  options: { value: string; label: string }[];
  problem?: string;
};

export function SelectCell({ at, label, value, change, options, problem }: SelectProps) {
  return (
    <div className="flex min-w-0 flex-col gap-1">
      <select
        id={at}
        name={at}
        aria-label={label}
        value={value}
        aria-invalid={problem ? true : undefined}
        aria-describedby={problem ? `${at}-problem` : undefined}
        onChange={(event) => change(event.target.value)}
        className={controlClass}
      >
        {options.map((o) => (
          <option key={o.value} value={o.value}>
            {o.label}
          </option>
        ))}
      </select>
      <CellProblem at={at} problem={problem} />
    </div>
  );
}

/** Takes a row out of a list. */
export function RemoveKey({ what, press }: { what: string; press: () => void }) {
  return (
    <button
      type="button"
      aria-label={`Remove ${what}`}
      onClick={press}
      className="press min-h-10 rounded-key border border-edge px-3 text-caption hover:border-ink hover:bg-well pointer-coarse:min-h-12"
    >
      Remove
    </button>
  );
}

/** A caption for eyes above a cell that carries its own label for ears. */
export function Labelled({ title, children }: { title: string; children: ReactNode }) {
  return (
    <div className="flex min-w-0 flex-col gap-1">
      <span aria-hidden="true" className="text-caption text-ink2">
        {title}
      </span>
      {children}
    </div>
  );
}
