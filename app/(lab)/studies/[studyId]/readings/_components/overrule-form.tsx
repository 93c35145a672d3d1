'use client';

import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { ActionProblem, Select, TextArea, useAction } from '@/components/forms';
import { Key } from '@/components/ui';
import { overruleForm } from '@/lib/contracts/forms/readings';
import { overruleVerdictAction } from '../actions';

type Verdict = 'steady' | 'damped' | 'sustained' | 'undecided';
type Props = {
  studyId: string;
  runId: string;
  runNumber: number;
  verdictId: string;
  standing: Verdict;
};

const VERDICTS: Verdict[] = ['steady', 'damped', 'sustained', 'undecided'];

/** Another verdict with a reason; the computed one stays visible beside it. */
export function OverruleForm(props: Props) {
  const { studyId, runId, runNumber, verdictId, standing } = props;
  const router = useRouter();
  const [open, setOpen] = useState(false);
  const [verdict, setVerdict] = useState<string>(VERDICTS.find((v) => v !== standing) ?? standing);
  const [reason, setReason] = useState('');
  const [fault, setFault] = useState<string | null>(null);
  const { run, pending, problem } = useAction(overruleVerdictAction, {
    onDone: () => {
      setOpen(false);
      setReason('');
      router.refresh();
    },
  });
  if (!open) return <Key onClick={() => setOpen(true)}>Overrule the verdict</Key>;
  function submit(event: React.FormEvent) {
    event.preventDefault();
    const read = overruleForm.safeParse({
      studyId,
      runId,
      seenVerdictId: verdictId,
      verdict,
      reason,
    });
    if (read.success) {
      setFault(null);
      void run(read.data);
      return;
    }
    setFault(read.error.issues[0]?.message ?? 'Not valid');
    document.getElementById('overrule-reason')?.focus();
  }
  return (
    <form noValidate onSubmit={submit} className="flex max-w-[640px] flex-col gap-3">
      <Select
        id="overrule-verdict"
        label={`Run ${runNumber} shows`}
        options={VERDICTS.map((v) => ({ value: v, label: v }))}
        value={verdict}
        onChange={(event) => setVerdict(event.target.value)}
      />
      <TextArea
        id="overrule-reason"
        label="Reason"
        hint="It stands with the verdict, on this page and on the report."
        maxLength={1000}
        value={reason}
        problem={fault}
        onChange={(event) => setReason(event.target.value)}
      />
      <ActionProblem problem={problem} />
      <div className="flex flex-wrap gap-3">
        <Key type="submit" kind="filled" pending={pending}>
          {pending ? 'Overruling' : 'Overrule'}
        </Key>
        <Key onClick={() => setOpen(false)}>Leave it as it is</Key>
      </div>
    </form>
  );
}
