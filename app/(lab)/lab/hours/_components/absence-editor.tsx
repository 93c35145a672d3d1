'use client';

import { type FormEvent, useState } from 'react';
import { v7 as uuid } from 'uuid';
import { ActionProblem, Select, TextField, useAction } from '@/components/forms';
import { Key, Plate } from '@/components/ui';
import { zoned } from '@/lib/format';
import { addAbsenceAction, removeAbsenceAction } from '../../actions';

type Props = {
  zone: string;
  people: { id: string; name: string }[];
  absences: { id: string; who: string; from: string; to: string; reason: string }[];
};
const LAB = 'lab';

/** Who is away and when the lab is closed; sessions are not placed there. */
export function AbsenceEditor({ zone, people, absences }: Props) {
  const [rowId, setRowId] = useState(() => uuid());
  const add = useAction(addAbsenceAction, { onDone: () => setRowId(uuid()) });
  const remove = useAction(removeAbsenceAction);
  function submit(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    const text = (name: string) => String(form.get(name));
    const at = (name: string) => zoned(text(name), zone).toJSDate().toISOString();
    void add.run({
      id: rowId,
      userId: text('away-who') === LAB ? null : text('away-who'),
      from: at('away-from'),
      to: at('away-to'),
      reason: text('away-reason'),
    });
  }
  return (
    <Plate title="Absences and closures">
      {absences.length === 0 ? (
        <p className="text-ink2">Nobody is away and nothing is closed.</p>
      ) : null}
      <ul>
        {absences.map((a) => (
          <li key={a.id} className="flex flex-wrap items-center gap-4 py-1">
            <span className="font-semibold">{a.who}</span>
            <span>
              {a.from} until {a.to}: {a.reason}
            </span>
            <Key
              pending={remove.pending}
              onClick={() => void remove.run({ id: a.id })}
              aria-label={`Remove ${a.reason} of ${a.who}`}
            >
              Remove
            </Key>
          </li>
        ))}
      </ul>
      <form key={rowId} onSubmit={submit} className="mt-3 flex flex-wrap items-end gap-4">
        <Select
          id="away-who"
          label="Who"
          defaultValue={LAB}
          options={[
            { value: LAB, label: 'The whole lab' },
            ...people.map((p) => ({ value: p.id, label: p.name })),
          ]}
        />
        <TextField id="away-from" label={`From, ${zone}`} type="datetime-local" required />
        <TextField id="away-to" label="Until" type="datetime-local" required />
        <TextField id="away-reason" label="Why" required maxLength={200} />
        <Key type="submit" kind="filled" pending={add.pending}>
          Add
        </Key>
      </form>
      <p className="mt-2 text-caption text-ink2">
        Sessions that are laid out already stay; move them on the calendar.
      </p>
      <ActionProblem problem={add.problem ?? remove.problem} />
    </Plate>
  );
}
