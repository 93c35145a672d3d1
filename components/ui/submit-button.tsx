'use client';

import { type ButtonHTMLAttributes, useSyncExternalStore } from 'react';

const never = () => () => undefined;

/**
 * A submit button that waits until the page's scripts hold the form: pressed (or Enter typed) before
 * that, the browser would send the form itself and lose what was typed.
 */
export function SubmitButton({ disabled, ...rest }: ButtonHTMLAttributes<HTMLButtonElement>) {
  const ready = useSyncExternalStore(
    never,
    () => true,
    () => false,
  );
  return (
    <button
      {...rest}
      type="submit"
      disabled={disabled || !ready}
      data-waiting={ready ? undefined : ''}
    />
  );
}
