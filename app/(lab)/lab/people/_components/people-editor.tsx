'use client';

import { type FormEvent, useState } from 'react';
import {
  ActionProblem,
  Check,
  NumberField,
  Select,
  TextField,
  useAction,
} from '@/components/forms';
import { Key, Plate } from '@/components/ui';
import { addPersonAction, changeMembershipAction } from '../../actions';

type Role = 'head' | 'investigator' | 'technician' | 'observer';
type Person = {
  userId: string;
  name: string;
  email: string;
  role: Role;
  skills: string[];
  maxMinutesPerDay: number | null;
  minRestHours: number | null;
};

const ROLES = [
  { value: 'head', label: 'Head' },
  { value: 'investigator', label: 'Investigator' },
  { value: 'technician', label: 'Technician' },
  { value: 'observer', label: 'Observer' },
];
const list = (text: FormDataEntryValue | null) =>
  String(text ?? '')
    .split(',')
    .map((s) => s.trim())
    .filter(Boolean);
const whole = (text: FormDataEntryValue | null) => {
  const t = String(text ?? '').trim();
  return t === '' ? null : Number(t);
};

/** Each person with role, skills and limits; a form for a new one. */
export function PeopleEditor({ people }: { people: Person[] }) {
  return (
    <div className="flex flex-col gap-6">
      {people.map((p) => (
        <PersonForm key={p.userId} person={p} />
      ))}
      <NewPerson />
    </div>
  );
}

function PersonForm({ person: p }: { person: Person }) {
  const [saved, setSaved] = useState(false);
  const { run, pending, problem } = useAction(changeMembershipAction, {
    onDone: () => setSaved(true),
  });
  function submit(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    setSaved(false);
    const form = new FormData(event.currentTarget);
    void run({
      userId: p.userId,
      role: form.get(`role-${p.userId}`) as Role,
      skills: list(form.get(`skills-${p.userId}`)),
      maxMinutesPerDay: whole(form.get(`most-${p.userId}`)),
      minRestHours: whole(form.get(`rest-${p.userId}`)),
      active: !form.get(`leaves-${p.userId}`),
    });
  }
  return (
    <Plate title={p.name}>
      <form onSubmit={submit} className="grid items-end gap-4 tablet:grid-cols-2 desk:grid-cols-5">
        <Select id={`role-${p.userId}`} label="Role" defaultValue={p.role} options={ROLES} />
        <TextField
          id={`skills-${p.userId}`}
          label="Skills, with commas"
          defaultValue={p.skills.join(', ')}
        />
        <NumberField
          id={`most-${p.userId}`}
          label="Bench time a day at most"
          unit="min"
          optional
          defaultValue={p.maxMinutesPerDay ?? ''}
        />
        <NumberField
          id={`rest-${p.userId}`}
          label="Rest between days"
          unit="h"
          optional
          defaultValue={p.minRestHours ?? ''}
        />
        <Check id={`leaves-${p.userId}`} label="Has left the lab" value="1" />
        <div className="flex items-center gap-3 desk:col-span-5">
          <Key type="submit" pending={pending}>
            Save
          </Key>
          <span className="text-ink2">{p.email}</span>
          <span role="status">{saved ? 'Saved.' : ''}</span>
        </div>
      </form>
      <ActionProblem problem={problem} />
    </Plate>
  );
}

function NewPerson() {
  const [added, setAdded] = useState<string | null>(null);
  const { run, pending, problem } = useAction(addPersonAction);
  async function submit(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    const element = event.currentTarget;
    const form = new FormData(element);
    setAdded(null);
    await run({
      name: String(form.get('new-name')),
      email: String(form.get('new-email')),
      role: form.get('new-role') as Role,
      skills: list(form.get('new-skills')),
      password: String(form.get('new-password')),
    });
    setAdded(String(form.get('new-name')));
  }
  const at = (field: string) => (problem?.at === field ? problem.message : undefined);
  return (
    <Plate title="Take somebody in">
      <form
        onSubmit={submit}
        className="grid items-start gap-4 tablet:grid-cols-2 desk:grid-cols-3"
      >
        <TextField id="new-name" label="Name" required problem={at('name')} />
        <TextField id="new-email" label="Address" type="email" required problem={at('email')} />
        <Select id="new-role" label="Role" defaultValue="technician" options={ROLES} />
        <TextField id="new-skills" label="Skills, with commas" optional />
        <TextField
          id="new-password"
          label="First password"
          type="password"
          autoComplete="new-password"
          minLength={12}
          required
          hint="At least 12 characters; they change it under their name."
          problem={at('password')}
        />
        <Key type="submit" kind="filled" pending={pending} className="self-end justify-self-start">
          Take in
        </Key>
      </form>
      <p role="status" className="mt-2">
        {added && !problem && !pending ? `${added} can sign in now.` : ''}
      </p>
      <ActionProblem problem={problem} />
    </Plate>
  );
}
