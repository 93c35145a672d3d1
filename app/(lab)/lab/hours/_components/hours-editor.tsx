'use client';

import { type FormEvent, useState } from 'react';
import { v7 as uuid } from 'uuid';
import { ActionProblem, Check, FieldGroup, TextField, useAction } from '@/components/forms';
import { Key, Plate } from '@/components/ui';
import { weekdays } from '@/lib/contracts/forms/lab';
import { addHoursAction, removeHoursAction } from '../../actions';

type Owner = {
  userId: string | null;
  rigId: string | null;
  name: string;
  none: string;
  hours: { id: string; words: string }[];
};
const DAY_NAMES = ['Mon', 'Tue', 'Wed', 'Thu', 'Fri', 'Sat', 'Sun'];

/** One person's or rig's hours in words, and a form for more. */
export function HoursEditor({ owner }: { owner: Owner }) {
  const [open, setOpen] = useState(false);
  const remove = useAction(removeHoursAction);
  return (
    <Plate
      title={owner.name}
      actions={
        <Key onClick={() => setOpen(!open)} aria-expanded={open}>
          Add hours
        </Key>
      }
    >
      {owner.hours.length === 0 ? <p className="text-ink2">{owner.none}</p> : null}
      <ul>
        {owner.hours.map((h) => (
          <li key={h.id} className="flex flex-wrap items-center gap-4 py-1">
            <span className="inline-block first-letter:uppercase">{h.words}</span>
            <Key
              pending={remove.pending}
              onClick={() => void remove.run({ id: h.id })}
              aria-label={`Remove ${h.words} of ${owner.name}`}
            >
              Remove
            </Key>
          </li>
        ))}
      </ul>
      <ActionProblem problem={remove.problem} />
      {open ? <NewHours owner={owner} onDone={() => setOpen(false)} /> : null}
    </Plate>
  );
}

function NewHours({ owner, onDone }: { owner: Owner; onDone: () => void }) {
  const { run, pending, problem } = useAction(addHoursAction, { onDone });
  const [rowId] = useState(() => uuid());
  const key = owner.userId ?? owner.rigId ?? '';
  function submit(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    void run({
      id: rowId,
      userId: owner.userId,
      rigId: owner.rigId,
      days: weekdays.filter((d) => form.get(`${d}-${key}`) !== null),
      from: String(form.get(`from-${key}`)),
      to: String(form.get(`to-${key}`)),
    });
  }
  return (
    <form onSubmit={submit} className="mt-4 flex flex-wrap items-end gap-4">
      <FieldGroup legend="Days">
        <div className="flex flex-wrap gap-3">
          {weekdays.map((d, i) => (
            <Check key={d} id={`${d}-${key}`} label={DAY_NAMES[i]} defaultChecked={i < 5} />
          ))}
        </div>
      </FieldGroup>
      <TextField id={`from-${key}`} label="From" type="time" required defaultValue="08:00" />
      <TextField id={`to-${key}`} label="Until" type="time" required defaultValue="17:00" />
      <Key type="submit" kind="filled" pending={pending}>
        Add
      </Key>
      <p className="w-full text-caption text-ink2">
        An end before the beginning means the next morning.
      </p>
      <ActionProblem problem={problem} />
    </form>
  );
}
