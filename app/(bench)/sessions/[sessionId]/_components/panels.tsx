'use client';

import { type FormEvent, useState } from 'react';
import { v7 as uuid } from 'uuid';
import { ActionProblem, Check, TextArea, useAction } from '@/components/forms';
import { Key } from '@/components/ui';
import { reportLostAction, writeRemarkAction } from '../actions';

/** Labels, words and ticks in the sizes of the bench. */
const form =
  'flex flex-col gap-5 [&_input]:size-8 [&_label]:text-bench [&_textarea]:text-bench-key';
const big = 'min-h-20! px-8 text-bench-key!';

/** A note, or a deviation from the plan. */
export function NotePanel(props: { studyId: string; sessionId: string; onClose: () => void }) {
  const [id] = useState(() => uuid());
  const { run, pending, problem } = useAction(writeRemarkAction, { onDone: props.onClose });
  function submit(event: FormEvent<HTMLFormElement>) {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    void run({
      id,
      studyId: props.studyId,
      sessionId: props.sessionId,
      kind: form.get('deviation') ? 'deviation' : 'note',
      text: String(form.get('text')),
    });
  }
  return (
    <form onSubmit={submit} className={form}>
      <TextArea id="text" label="What you saw" rows={6} required autoFocus />
      <Check id="deviation" label="It did not go as planned (a deviation)" value="1" />
      <ActionProblem problem={problem} />
      <div className="flex flex-wrap gap-4">
        <Key type="submit" kind="filled" pending={pending} className={big}>
          Write it down
        </Key>
        <Key onClick={props.onClose} className={big}>
          Back
        </Key>
      </div>
    </form>
  );
}

const REASONS = ['rig not free', 'preparation not ready', 'nothing could be drawn', 'no time'];

/** A skipped step says why: one press, or words. */
export function SkipPanel(props: { onSkip: (why: string) => void; onClose: () => void }) {
  const [words, setWords] = useState('');
  return (
    <div className={form}>
      <h2 className="text-instruction font-medium">Skipped because …</h2>
      <div className="grid gap-4 tablet:grid-cols-2">
        {REASONS.map((why) => (
          <Key key={why} className={big} onClick={() => props.onSkip(why)}>
            {why}
          </Key>
        ))}
      </div>
      <TextArea
        id="skip-words"
        label="Or in your words"
        value={words}
        onChange={(event) => setWords(event.target.value)}
      />
      <div className="flex flex-wrap gap-4">
        <Key
          kind="filled"
          className={big}
          disabled={words.trim() === ''}
          onClick={() => props.onSkip(words.trim())}
        >
          Skip it
        </Key>
        <Key onClick={props.onClose} className={big}>
          Back
        </Key>
      </div>
    </div>
  );
}

/** The preparation died or did not come: later runs go, the record stays. */
export function LostPanel(props: { sessionId: string; onClose: () => void }) {
  const { run, pending, problem } = useAction(reportLostAction, { onDone: props.onClose });
  const [reason, setReason] = useState('');
  return (
    <div className={form}>
      <h2 className="text-instruction font-medium">Is the preparation lost?</h2>
      <p className="text-bench">
        Its record up to now is kept. Its later runs and sessions are taken off the calendar and the
        rig is freed.
      </p>
      <TextArea
        id="lost-reason"
        label="What happened"
        value={reason}
        onChange={(event) => setReason(event.target.value)}
      />
      <ActionProblem problem={problem} />
      <div className="flex flex-wrap gap-4">
        <Key
          kind="filled"
          className={big}
          pending={pending}
          disabled={reason.trim() === ''}
          onClick={() =>
            void run({ sessionId: props.sessionId, at: new Date().toISOString(), reason })
          }
        >
          It is lost
        </Key>
        <Key onClick={props.onClose} className={big}>
          Back
        </Key>
      </div>
    </div>
  );
}
