'use client';

import { useCallback, useState } from 'react';
import { ActionProblem, FollowJob, TextField, useAction } from '@/components/forms';
import { Key, Plate } from '@/components/ui';
import { zoned } from '@/lib/format';
import { askLayOutAction } from '../actions';

type Props = {
  studyId: string;
  seriesVersionId: string;
  number: number;
  revision: number;
  laidOut: string | null;
  zone: string;
  expires: string | null;
};

const DAYS_AHEAD = 90;

/** Between which days the approved series is laid out; people, rigs and hours are the lab's own. */
export function LayOutPanel(props: Props) {
  const { studyId, seriesVersionId, number, revision, laidOut, zone } = props;
  const [jobId, setJobId] = useState<string | null>(null);
  const { run, pending, problem } = useAction(askLayOutAction, {
    onDone: (asked) => setJobId(asked.jobId),
  });
  const again = useCallback(() => setJobId(null), []);
  if (jobId) {
    return (
      <FollowJob
        jobId={jobId}
        what="runs"
        words="Placing runs, people and rigs."
        onDone={again}
        onAgain={again}
      />
    );
  }
  const first = zoned(Date.now(), zone);
  const last = first.plus({ days: DAYS_AHEAD });
  const expiry = props.expires ? zoned(props.expires, zone) : null;
  function submit(event: React.FormEvent<HTMLFormElement>) {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    const at = (key: string, time: string) =>
      zoned(`${form.get(key)}T${time}`, zone)
        .toJSDate()
        .toISOString();
    void run({
      studyId,
      seriesVersionId,
      revision,
      notBefore: at('first-day', '00:00'),
      notAfter: at('last-day', '23:55'),
    });
  }
  return (
    <Plate title={`Lay out version ${number}`}>
      <form onSubmit={submit} className="flex flex-wrap items-end gap-4">
        <TextField
          id="first-day"
          label="From"
          type="date"
          required
          defaultValue={first.toFormat('yyyy-MM-dd')}
        />
        <TextField
          id="last-day"
          label="Until"
          type="date"
          required
          defaultValue={(expiry && expiry < last ? expiry : last).toFormat('yyyy-MM-dd')}
        />
        <Key type="submit" kind={laidOut ? 'outlined' : 'filled'} pending={pending}>
          {laidOut ? 'Lay out anew what has not begun' : 'Lay out the sessions'}
        </Key>
      </form>
      <p className="mt-3 text-caption text-ink2">
        {laidOut ? `Laid out ${laidOut}. Runs that have begun stay as they are. ` : ''}
        Those concerned get one mail each.
      </p>
      <ActionProblem problem={problem} />
    </Plate>
  );
}
