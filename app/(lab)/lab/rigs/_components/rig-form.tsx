'use client';

import { type FormEvent, useState } from 'react';
import { ActionProblem, Check, NumberField, TextField, useAction } from '@/components/forms';
import { Key, Plate } from '@/components/ui';
import { saveRigAction } from '../../actions';

type Rig = {
  id: string;
  name: string;
  place: string;
  capacity: number;
  skills: string[];
  recordsItself: boolean;
  retired: boolean;
};

/** One rig; without one, the form for a new rig. */
export function RigForm({ rig }: { rig: Rig | null }) {
  const [saved, setSaved] = useState(false);
  const [round, setRound] = useState(0);
  const { run, pending, problem } = useAction(saveRigAction, {
    onDone: () => {
      setSaved(true);
      if (!rig) setRound((n) => n + 1);
    },
  });
  const key = rig?.id ?? 'new';
  const id = (name: string) => `${name}-${key}`;
  function submit(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    setSaved(false);
    const form = new FormData(event.currentTarget);
    const text = (name: string) => String(form.get(id(name)) ?? '').trim();
    void run({
      rigId: rig?.id ?? null,
      name: text('name'),
      place: text('place'),
      capacity: Number(text('capacity')),
      skills: text('skills')
        .split(',')
        .map((s) => s.trim())
        .filter(Boolean),
      recordsItself: form.get(id('records')) !== null,
      retired: form.get(id('retired')) !== null,
    });
  }
  const at = (field: string) => (problem?.at === field ? problem.message : undefined);
  return (
    <Plate title={rig?.name ?? 'Add a rig'}>
      <form
        key={round}
        onSubmit={submit}
        className="grid items-end gap-4 tablet:grid-cols-2 desk:grid-cols-4"
      >
        <TextField
          id={id('name')}
          label="Name"
          required
          defaultValue={rig?.name}
          problem={at('name')}
        />
        <TextField id={id('place')} label="Where it stands" required defaultValue={rig?.place} />
        <NumberField
          id={id('capacity')}
          label="Runs at a time"
          min={1}
          step={1}
          required
          defaultValue={rig?.capacity ?? 1}
        />
        <TextField
          id={id('skills')}
          label="Skills needed, with commas"
          optional
          defaultValue={rig?.skills.join(', ')}
        />
        <Check
          id={id('records')}
          label="Records by itself"
          hint="A person sets the dose and collects the record."
          defaultChecked={rig?.recordsItself}
        />
        {rig ? (
          <Check
            id={id('retired')}
            label="Retired"
            hint="Takes no new runs."
            defaultChecked={rig.retired}
          />
        ) : null}
        <div className="flex items-center gap-3">
          <Key type="submit" kind={rig ? 'outlined' : 'filled'} pending={pending}>
            {rig ? 'Save' : 'Add the rig'}
          </Key>
          <span role="status">{saved ? 'Saved.' : ''}</span>
        </div>
      </form>
      <ActionProblem problem={problem} />
    </Plate>
  );
}
