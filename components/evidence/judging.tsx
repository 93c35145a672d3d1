'use client';

import { useRouter } from 'next/navigation';
import { useCallback, useState } from 'react';
import { ActionProblem, FollowJob, useAction } from '@/components/forms';
import { FailedState, Key } from '@/components/ui';
import type { ActionResult } from '@/lib/contracts';

type Props = {
  studyId: string;
  /** the newest calculation of verdicts: followed while it runs, told when it failed */
  job: { id: string; state: 'running' | 'failed'; error: string | null } | null;
  /** why the verdicts should be worked out anew though nothing failed */
  stale?: string | null;
  /** asks anew; absent where the role may not */
  again: ((input: { studyId: string }) => Promise<ActionResult<{ jobId: string }>>) | null;
};

const nobody = async (): Promise<ActionResult<{ jobId: string }>> => ({
  ok: false,
  problem: { code: 'forbidden', message: 'This is for those at the bench.' },
});

/** Follows the verdicts while they are worked out; says so when they could not be. */
export function Judging({ studyId, job, stale, again }: Props) {
  const router = useRouter();
  const [asked, setAsked] = useState<string | null>(null);
  const [over, setOver] = useState<string | null>(null);
  const { run, pending, problem } = useAction(again ?? nobody, {
    onDone: ({ jobId }) => setAsked(jobId),
  });
  const current = asked ?? (job?.state === 'running' ? job.id : null);
  const end = useCallback(() => {
    setOver(current);
    router.refresh();
  }, [current, router]);
  if (current && current !== over) {
    return (
      <div className="mb-6">
        <FollowJob
          jobId={current}
          what="records"
          words="Judging the records, then estimating the onset. You may leave this page; it goes on."
          onDone={end}
          onAgain={end}
        />
      </div>
    );
  }
  const key = again ? (
    <Key pending={pending} onClick={() => void run({ studyId })}>
      Judge again
    </Key>
  ) : null;
  if (job?.state === 'failed' && job.id !== over) {
    return (
      <div className="mb-6">
        <FailedState
          title="The verdicts could not be worked out"
          safe="The readings are kept; earlier verdicts are unchanged."
          action={key}
        >
          <p>{job.error}</p>
          <ActionProblem problem={problem} />
        </FailedState>
      </div>
    );
  }
  if (!stale) return null;
  return (
    <div className="mb-6 flex flex-wrap items-center gap-4 border-l-[3px] border-ink bg-plate px-4 py-2">
      <p>{stale}</p>
      {key}
      <ActionProblem problem={problem} />
    </div>
  );
}
