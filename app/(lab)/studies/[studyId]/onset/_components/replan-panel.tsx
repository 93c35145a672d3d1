'use client';

import { useRouter } from 'next/navigation';
import { useCallback, useState } from 'react';
import { cancelJob } from '@/app/(lab)/jobs-actions';
import { ActionProblem, FollowJob, NumberField, useAction } from '@/components/forms';
import { Key } from '@/components/ui';
import { replanForm } from '@/lib/contracts/forms/readings';
import { askReplanAction } from '../actions';

const LEVELS = 3;

/** Proposes the next levels within the approval; they become a draft on the Series page. */
export function ReplanPanel({ studyId }: { studyId: string }) {
  const router = useRouter();
  const [open, setOpen] = useState(false);
  const [levels, setLevels] = useState(String(LEVELS));
  const [fault, setFault] = useState<string | null>(null);
  const [jobId, setJobId] = useState<string | null>(null);
  const { run, pending, problem } = useAction(askReplanAction, {
    onDone: (asked) => setJobId(asked.jobId),
  });
  const again = useCallback(() => setJobId(null), []);
  const done = useCallback(() => router.push(`/studies/${studyId}/series`), [router, studyId]);
  if (jobId) {
    return (
      <div className="w-full">
        <FollowJob
          jobId={jobId}
          what="onsets"
          words="Choosing the next levels."
          cancel={cancelJob}
          onDone={done}
          onAgain={again}
        />
      </div>
    );
  }
  if (!open) {
    return (
      <Key kind="filled" onClick={() => setOpen(true)}>
        Propose next levels
      </Key>
    );
  }
  function submit(event: React.FormEvent) {
    event.preventDefault();
    const read = replanForm.safeParse({
      studyId,
      levels: levels.trim() === '' ? undefined : Number(levels),
    });
    if (read.success) {
      setFault(null);
      void run(read.data);
      return;
    }
    setFault(read.error.issues[0]?.message ?? 'Not valid');
    document.getElementById('replan-levels')?.focus();
  }
  return (
    <form noValidate onSubmit={submit} className="flex w-full flex-col gap-3">
      <NumberField
        id="replan-levels"
        label="Levels an onset"
        hint="Scheme, order and preparations are the approved ones. It becomes a draft of the series."
        min={1}
        max={12}
        className="max-w-80"
        value={levels}
        problem={fault}
        onChange={(event) => setLevels(event.target.value)}
      />
      <ActionProblem problem={problem} />
      <div className="flex flex-wrap gap-3">
        <Key type="submit" kind="filled" pending={pending}>
          {pending ? 'Asking' : 'Propose next levels'}
        </Key>
        <Key onClick={() => setOpen(false)}>Not now</Key>
      </div>
    </form>
  );
}
