'use client';

import Link from 'next/link';
import { type FormEvent, Fragment, useState } from 'react';
import { Select, TextField } from '@/components/forms';
import { VerdictMark } from '@/components/marks';
import { Key } from '@/components/ui';
import { spanText, zoned } from '@/lib/format';
import type { CalendarPerson, CalendarSession } from './types';

type Props = {
  sessions: CalendarSession[];
  people: CalendarPerson[];
  zone: string;
  mayAssign: boolean;
  onMove: (session: CalendarSession, startsAt: string, personId: string) => void;
};

const dayOf = (s: CalendarSession, zone: string) => zoned(s.from, zone).toFormat('yyyy-MM-dd');

/** The same sessions as a list: everything that dragging does, by keyboard. */
export function SessionList({ sessions, people, zone, mayAssign, onMove }: Props) {
  const [open, setOpen] = useState<string | null>(null);
  const days = [...new Set(sessions.map((s) => dayOf(s, zone)))];
  return (
    <div className="flex flex-col gap-6">
      {days.map((day) => (
        <section key={day} aria-label={day}>
          <h2 className="mb-2 text-section font-semibold">
            {zoned(`${day}T12:00:00`, zone).setLocale('en-GB').toFormat('cccc d LLLL yyyy')}
          </h2>
          <ul className="rounded-key border border-rule bg-plate">
            {sessions
              .filter((s) => dayOf(s, zone) === day)
              .map((s) => (
                <Fragment key={s.id}>
                  <Line
                    session={s}
                    zone={zone}
                    opened={open === s.id}
                    onToggle={() => setOpen(open === s.id ? null : s.id)}
                  />
                  {open === s.id ? (
                    <MoveForm
                      session={s}
                      people={people}
                      zone={zone}
                      mayAssign={mayAssign}
                      onMove={onMove}
                      onClose={() => setOpen(null)}
                    />
                  ) : null}
                </Fragment>
              ))}
          </ul>
        </section>
      ))}
    </div>
  );
}

function Line(props: {
  session: CalendarSession;
  zone: string;
  opened: boolean;
  onToggle: () => void;
}) {
  const { session: s, zone, opened, onToggle } = props;
  return (
    <li className="grid grid-cols-[minmax(0,1fr)_auto] items-center gap-x-4 gap-y-1 border-b border-rule px-4 py-2 last:border-b-0 tablet:grid-cols-[7.5rem_9rem_minmax(0,1fr)_auto]">
      <span className="font-mono">{spanText(s.from, s.to, zone)}</span>
      <span className="inline-flex items-center gap-2 font-mono font-semibold whitespace-nowrap">
        <VerdictMark state={s.state === 'suspended' ? 'stopped' : s.place} />
        {s.dose}
      </span>
      <span className="min-w-0">
        <Link
          href={`/sessions/${s.id}`}
          className="block truncate underline underline-offset-4"
          title={`${s.study}, run ${s.run}: ${s.what}`}
        >
          {`Run ${s.run}, ${s.study}: ${s.what}`}
        </Link>
        <span className="block truncate text-caption text-ink2">
          {s.rig}, {s.person}
          {s.state === 'planned' ? '' : `, ${s.state === 'suspended' ? 'held by a stop' : s.state}`}
        </span>
      </span>
      {s.movable ? (
        <Key onClick={onToggle} aria-expanded={opened} aria-label={`Move run ${s.run}, ${s.what}`}>
          Move
        </Key>
      ) : (
        <span />
      )}
    </li>
  );
}

function MoveForm(props: {
  session: CalendarSession;
  people: CalendarPerson[];
  zone: string;
  mayAssign: boolean;
  onMove: Props['onMove'];
  onClose: () => void;
}) {
  const { session: s, people, zone, mayAssign } = props;
  const at = zoned(s.from, zone);
  function submit(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    const when = zoned(`${form.get(`day-${s.id}`)}T${form.get(`time-${s.id}`)}`, zone);
    const personId = String(form.get(`person-${s.id}`) ?? s.personId);
    props.onMove(s, when.toJSDate().toISOString(), personId);
  }
  return (
    <li className="border-b border-rule bg-selected px-4 py-3">
      <form onSubmit={submit} className="flex flex-wrap items-end gap-3">
        <TextField
          id={`day-${s.id}`}
          label="Day"
          type="date"
          required
          defaultValue={at.toFormat('yyyy-MM-dd')}
        />
        <TextField
          id={`time-${s.id}`}
          label={`Begins, ${zone}`}
          type="time"
          step={300}
          required
          defaultValue={at.toFormat('HH:mm')}
        />
        {mayAssign ? (
          <Select
            id={`person-${s.id}`}
            label="Person"
            defaultValue={s.personId}
            options={people.map((p) => ({ value: p.id, label: p.name }))}
          />
        ) : null}
        <Key type="submit" kind="filled">
          Move the session
        </Key>
        <Key onClick={props.onClose}>Leave it</Key>
      </form>
    </li>
  );
}
