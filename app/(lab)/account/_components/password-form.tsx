'use client';

import type { FormEvent } from 'react';
import { ActionProblem, TextField, useAction } from '@/components/forms';
import { Key, Plate } from '@/components/ui';
import { changePasswordAction } from '../actions';

/** A new password ends every session of the old one. */
export function PasswordForm() {
  const { run, pending, problem } = useAction(changePasswordAction, {
    onDone: () => window.location.assign('/sign-in?why=expired'),
  });
  function submit(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    void run({ current: String(form.get('current')), next: String(form.get('next')) });
  }
  return (
    <Plate title="Password">
      <form method="post" onSubmit={submit} className="flex flex-col gap-4">
        <TextField
          id="current"
          label="The password you have now"
          type="password"
          autoComplete="current-password"
          required
          problem={problem?.at === 'current' ? problem.message : undefined}
        />
        <TextField
          id="next"
          label="New password"
          type="password"
          autoComplete="new-password"
          minLength={12}
          required
          hint="At least 12 characters. You sign in again with it, on every device."
        />
        <ActionProblem problem={problem} />
        <Key type="submit" kind="filled" pending={pending} className="self-start">
          Change it
        </Key>
      </form>
    </Plate>
  );
}
