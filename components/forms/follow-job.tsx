'use client';

import { useRouter } from 'next/navigation';
import { useCallback, useState } from 'react';
import { FailedState, Key, LoadingRibbon } from '@/components/ui';
import type { ActionResult } from '@/lib/contracts';
import { ActionProblem } from './action-problem';
import { useAction } from './use-action';
import { type JobView, useJob } from './use-job';

type Props = {
  jobId: string;
  /** What is counted: "runs". */
  what: string;
  /** What goes on meanwhile, as a sentence. */
  words: string;
  cancel?: (input: { jobId: string }) => Promise<ActionResult<unknown>>;
  onDone?: (job: JobView) => void;
  onAgain: () => void;
};

const noCancel = async (): Promise<ActionResult<unknown>> => ({ ok: true, value: null });

/** Follows a calculation to its end: progress, cancel, and the words of a failure. */
export function FollowJob({ jobId, what, words, cancel, onDone, onAgain }: Props) {
  const router = useRouter();
  const [failed, setFailed] = useState<JobView | null>(null);
  const job = useJob(
    jobId,
    useCallback(
      (ended: JobView) => {
        if (ended.state === 'done') {
          onDone?.(ended);
          router.refresh();
        } else if (ended.state === 'failed') setFailed(ended);
        else onAgain();
      },
      [onDone, onAgain, router],
    ),
  );
  const { run, pending, problem } = useAction(cancel ?? noCancel);
  if (failed) {
    return (
      <FailedState
        title="It did not work"
        safe="What was there before is unchanged."
        action={<Key onClick={onAgain}>Try again</Key>}
      >
        <p>{failed.error}</p>
      </FailedState>
    );
  }
  const total = job?.total ?? 0;
  return (
    <div className="rounded-key border border-rule bg-plate p-4">
      <LoadingRibbon
        size="card"
        what={what}
        done={total > 0 ? job?.done : undefined}
        total={total || undefined}
      />
      <div className="mt-3 flex flex-wrap items-center gap-4">
        <p role="status" className="text-ink2">
          {job?.state === 'running' ? words : 'Waiting for its turn.'}
        </p>
        {cancel ? (
          <Key className="ml-auto" pending={pending} onClick={() => void run({ jobId })}>
            Cancel
          </Key>
        ) : null}
      </div>
      <ActionProblem problem={problem} />
    </div>
  );
}
