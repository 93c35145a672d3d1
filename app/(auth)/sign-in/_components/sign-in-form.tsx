'use client';

import { signIn } from 'next-auth/react';
import { type FormEvent, useState } from 'react';
import { FormProblem, TextField } from '@/components/forms';
import { Key } from '@/components/ui';

const words = {
  wrong: {
    what: 'Address and password do not belong together.',
    how: 'Check both; capitals matter in the password. After ten attempts the address rests for 15 minutes.',
  },
  many: {
    what: 'Too many attempts with this address.',
    how: 'Wait 15 minutes, then try again, or ask the lab head.',
  },
  away: {
    what: 'The server did not answer.',
    how: 'Check the network and press again.',
  },
};

export function SignInForm() {
  const [pending, setPending] = useState(false);
  const [problem, setProblem] = useState<keyof typeof words | null>(null);

  async function submit(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    if (pending) return;
    const form = new FormData(event.currentTarget);
    setPending(true);
    setProblem(null);
    try {
      const answer = await signIn('credentials', {
        redirect: false,
        email: String(form.get('email')),
        password: String(form.get('password')),
      });
      if (answer?.ok) {
        window.location.assign('/today');
        return;
      }
      setProblem(answer?.error === 'too-many' ? 'many' : 'wrong');
    } catch {
      setProblem('away');
    }
    setPending(false);
  }

  return (
    <form method="post" onSubmit={submit} className="flex flex-col gap-4">
      <FormProblem problems={problem ? words[problem] : null} />
      <TextField id="email" label="Address" type="email" autoComplete="username" required />
      <TextField
        id="password"
        label="Password"
        type="password"
        autoComplete="current-password"
        required
      />
      <Key kind="filled" type="submit" pending={pending} className="self-start">
        {pending ? 'Signing in' : 'Sign in'}
      </Key>
    </form>
  );
}
