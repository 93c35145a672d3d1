'use client';

import { useRouter } from 'next/navigation';
import { type ReactNode, useCallback, useEffect, useState } from 'react';
import { cancelJob } from '@/app/(lab)/jobs-actions';
import { ActionProblem, NumberField, useAction, useJob } from '@/components/forms';
import { Key, LoadingRibbon, Plate } from '@/components/ui';
import { askPredictionInput } from '@/lib/contracts/forms/study';
import { askPrediction } from '../actions';

type PanelProps = {
  studyId: string;
  systemNumber: number;
  /** a calculation that was under way when the page was made */
  activeJobId: string | null;
  draws: number;
  seed: number;
  /** the one act of the page, or one among others */
  keyKind: 'filled' | 'outlined';
  keyName: string;
  /** stands in the column of a finding */
  compact?: boolean;
  /** shown while nothing is being worked out */
  children?: ReactNode;
};

/** Asks for a prediction and follows it to its end; leaving the page does not end it. */
export function PredictPanel(props: PanelProps) {
  const router = useRouter();
  const [asked, setAsked] = useState<string | null>(null);
  const [over, setOver] = useState<string | null>(null);
  const current = asked ?? props.activeJobId;
  const jobId = current === over ? null : current;
  const job = useJob(
    jobId,
    useCallback(
      (ended: { id: string }) => {
        setOver(ended.id);
        router.refresh();
      },
      [router],
    ),
  );
  if (jobId) {
    return (
      <Working
        compact={props.compact}
        jobId={jobId}
        done={job?.done ?? 0}
        total={job?.total ?? 0}
        stage={job?.stage ?? ''}
      />
    );
  }
  return (
    <>
      {props.children}
      <AskForm
        key={`${props.draws} ${props.seed}`}
        {...props}
        onAsked={setAsked}
        returned={over !== null}
      />
    </>
  );
}

type WorkingProps = {
  jobId: string;
  done: number;
  total: number;
  stage: string;
  compact?: boolean;
};

function Working(props: WorkingProps) {
  const { jobId, done, total, stage, compact } = props;
  const { run, pending, problem } = useAction(cancelJob);
  return (
    <Plate className="mb-6 w-full">
      <LoadingRibbon
        size={compact ? 'card' : 'page'}
        what={total > 0 ? 'draws' : 'waiting'}
        done={total > 0 ? done : undefined}
        total={total || undefined}
      />
      <div className="mt-4 flex flex-wrap items-center gap-4">
        <p role="status" className="text-ink2">
          {stage ? `Working: ${stage}.` : 'Waiting for its turn.'} You may leave this page; the
          prediction goes on.
        </p>
        <Key className="ml-auto" pending={pending} onClick={() => void run({ jobId })}>
          Cancel
        </Key>
      </div>
      <ActionProblem problem={problem} />
    </Plate>
  );
}

type AskProps = PanelProps & {
  onAsked: (jobId: string) => void;
  /** a calculation has just ended here */
  returned: boolean;
};

function AskForm(props: AskProps) {
  const { studyId, systemNumber, keyKind, keyName, onAsked } = props;
  const [draws, setDraws] = useState(String(props.draws));
  const [seed, setSeed] = useState(String(props.seed));
  const [found, setFound] = useState<Record<string, string>>({});
  const { run, pending, problem } = useAction(askPrediction, {
    onDone: ({ jobId }) => onAsked(jobId),
  });
  const { returned } = props;
  useEffect(() => {
    // The key that held the focus, Cancel, is gone; whoever works by keyboard goes on from here.
    if (returned && document.activeElement === document.body) {
      document.getElementById('predict')?.focus({ preventScroll: true });
    }
  }, [returned]);
  const submit = async () => {
    const number = (text: string) => (text.trim() === '' ? undefined : Number(text));
    const wanted = { studyId, systemNumber, draws: number(draws), seed: number(seed) };
    const read = askPredictionInput.safeParse(wanted);
    const problems = read.error?.issues.map((i) => [String(i.path[0]), i.message]) ?? [];
    setFound(Object.fromEntries(problems.reverse()));
    if (read.success) await run(read.data);
    else document.getElementById(String(read.error.issues[0]?.path[0]))?.focus();
  };
  return (
    <form
      noValidate
      className="flex w-full flex-col gap-3"
      onSubmit={(event) => {
        event.preventDefault();
        void submit();
      }}
    >
      <div className="grid max-w-96 grid-cols-2 items-start gap-4">
        <NumberField
          id="draws"
          label="Draws"
          value={draws}
          onChange={(event) => setDraws(event.target.value)}
          problem={found.draws}
        />
        <NumberField
          id="seed"
          label="Seed"
          value={seed}
          onChange={(event) => setSeed(event.target.value)}
          problem={found.seed}
        />
      </div>
      <p className="max-w-[640px] text-caption text-ink2">
        Each draw takes the parameters from their spreads; the band follows from all of them. The
        same seed gives the same answer.
      </p>
      <div>
        <Key id="predict" kind={keyKind} type="submit" pending={pending}>
          {pending ? 'Asking' : keyName}
        </Key>
      </div>
      <ActionProblem problem={problem} />
    </form>
  );
}
