import clsx from 'clsx';
import Link from 'next/link';
import type { ButtonHTMLAttributes, ReactNode } from 'react';
import { SubmitButton } from './submit-button';

export type KeyKind = 'filled' | 'outlined' | 'stop';

const LOOK: Record<KeyKind, string> = {
  filled:
    'border-index bg-index text-on-index hover:border-ink hover:bg-[color-mix(in_srgb,var(--index)_88%,var(--ink))]',
  outlined: 'border-edge text-ink hover:border-ink hover:bg-well',
  stop: 'border-2 border-stop text-stop hover:bg-[color-mix(in_srgb,var(--stop)_10%,var(--plate))]',
};

/** Shape and colours of a key; 40 px high, 48 on a touch screen. */
export function keyClass(kind: KeyKind = 'outlined', className?: string): string {
  return clsx(
    'press inline-flex min-h-10 items-center justify-center gap-2 rounded-key border px-4 py-2 text-body leading-5 font-semibold pointer-coarse:min-h-12 print:hidden',
    'disabled:not-data-waiting:cursor-not-allowed disabled:not-data-waiting:border-dashed disabled:not-data-waiting:border-edge disabled:not-data-waiting:bg-transparent disabled:not-data-waiting:text-ink2',
    LOOK[kind],
    className,
  );
}

type KeyProps = ButtonHTMLAttributes<HTMLButtonElement> & {
  kind?: KeyKind;
  /** the act is under way: the key keeps its place and does not press again */
  pending?: boolean;
};

/** A key: filled for the one act of a page, outlined for the others, stop for stops alone. */
export function Key({ kind, pending, className, disabled, type, ...rest }: KeyProps) {
  const shared = {
    ...rest,
    disabled: disabled || pending,
    'aria-busy': pending || undefined,
    className: keyClass(kind, className),
  };
  if (type === 'submit') return <SubmitButton {...shared} />;
  return <button {...shared} type={type ?? 'button'} />;
}

/** A key that leads somewhere. */
export function KeyLink(props: {
  href: string;
  kind?: Exclude<KeyKind, 'stop'>;
  className?: string;
  children: ReactNode;
}) {
  return (
    <Link href={props.href} className={keyClass(props.kind, props.className)}>
      {props.children}
    </Link>
  );
}
