'use client';

import { useState } from 'react';
import { ActionProblem, TextArea, useAction } from '@/components/forms';
import { Key, KeyLink } from '@/components/ui';
import { decideSeriesAction, submitSeriesAction } from '../actions';

type Props = {
  studyId: string;
  version: {
    id: string;
    number: number;
    revision: number;
    state: 'draft' | 'submitted' | 'approved' | 'superseded';
    laidOut: boolean;
  };
  writes: boolean;
  approves: boolean;
};

/** The one act that a version waits for: ask, decide, or lay out. */
export function DecisionForm({ studyId, version, writes, approves }: Props) {
  const [words, setWords] = useState('');
  const submit = useAction(submitSeriesAction);
  const decide = useAction(decideSeriesAction);
  const ref = { studyId, seriesVersionId: version.id, revision: version.revision };
  if (version.state === 'draft' && writes) {
    return (
      <div className="flex flex-col gap-3">
        <Key kind="filled" pending={submit.pending} onClick={() => void submit.run(ref)}>
          Ask for approval
        </Key>
        <ActionProblem problem={submit.problem} />
      </div>
    );
  }
  if (version.state === 'submitted' && approves) {
    const act = (decision: 'approve' | 'send back') => void decide.run({ ...ref, decision, words });
    return (
      <div className="flex w-full flex-col gap-3">
        <TextArea
          id="decision-words"
          label="Words to the author"
          hint="Needed when you send it back."
          value={words}
          onChange={(event) => setWords(event.target.value)}
        />
        <div className="flex flex-wrap gap-3">
          <Key kind="filled" pending={decide.pending} onClick={() => act('approve')}>
            Approve version {version.number}
          </Key>
          <Key pending={decide.pending} onClick={() => act('send back')}>
            Send back
          </Key>
        </div>
        <ActionProblem problem={decide.problem} />
      </div>
    );
  }
  if (version.state === 'submitted') {
    return <p className="text-ink2">It waits for the lab head.</p>;
  }
  if (version.state === 'approved') {
    return (
      <KeyLink kind="filled" href={`/studies/${studyId}/sessions`}>
        {writes && !version.laidOut ? 'Lay out the sessions' : 'See the sessions'}
      </KeyLink>
    );
  }
  return null;
}
