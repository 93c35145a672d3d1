'use client';

import { useRouter } from 'next/navigation';
import { useRef, useState } from 'react';
import { ActionProblem, TextField, useAction } from '@/components/forms';
import { Key } from '@/components/ui';
import { changeStudyInput } from '@/lib/contracts/forms/study';
import {
  fieldsOf,
  focusFirstProblem,
  problemsByField,
  refusalByField,
  type StudyDraft,
} from '../../_components/study-draft';
import { AboutFields, ApprovalFields, LimitFields } from '../../_components/study-fields';
import { changeStudy } from '../actions';

type Props = {
  studyId: string;
  start: StudyDraft;
  rigs: { id: string; name: string; place: string }[];
};

/** Opens the form that changes a study's limits; what they were stays on the audit trail. */
export function ChangeStudy(props: Props) {
  const [open, setOpen] = useState(false);
  if (!open) {
    return (
      <div className="mt-4">
        <Key onClick={() => setOpen(true)}>Change</Key>
      </div>
    );
  }
  return <ChangeForm {...props} close={() => setOpen(false)} />;
}

function ChangeForm({ studyId, start, rigs, close }: Props & { close: () => void }) {
  const router = useRouter();
  const form = useRef<HTMLFormElement>(null);
  const [draft, setDraft] = useState(start);
  const [reason, setReason] = useState('');
  const [found, setFound] = useState<Record<string, string>>({});
  const { run, pending, problem } = useAction(changeStudy, {
    onDone: () => {
      close();
      router.refresh();
    },
  });
  const problems = { ...refusalByField(problem), ...found };
  const fields = {
    draft,
    change: (part: Partial<StudyDraft>) => setDraft((now) => ({ ...now, ...part })),
    problems,
    rigs,
  };
  const submit = async () => {
    const read = changeStudyInput.safeParse({ ...fieldsOf(draft), studyId, reason });
    setFound(read.success ? {} : problemsByField(read.error));
    if (read.success) await run(read.data);
    focusFirstProblem(form.current);
  };
  return (
    <form
      ref={form}
      noValidate
      className="mt-6 flex flex-col gap-6"
      onSubmit={(event) => {
        event.preventDefault();
        void submit();
      }}
    >
      <AboutFields {...fields} />
      <LimitFields {...fields} />
      <ApprovalFields {...fields} />
      <TextField
        id="reason"
        label="Why it changes"
        maxLength={300}
        value={reason}
        onChange={(event) => setReason(event.target.value)}
        problem={problems.reason}
      />
      <ActionProblem problem={problem} />
      <div className="flex flex-wrap gap-3">
        <Key kind="filled" type="submit" pending={pending}>
          {pending ? 'Saving' : 'Save the change'}
        </Key>
        <Key onClick={close}>Leave it as it is</Key>
      </div>
    </form>
  );
}
