'use client';

import { useState } from 'react';
import { ActionProblem, TextField, useAction } from '@/components/forms';
import { Key, Plate } from '@/components/ui';
import { liftStopAction, stopStudyAction, takeBackStopAction } from '../actions';

type Stop = { id: string; by: string; at: string; whole: boolean; dose: string | null };

/** The stop rules, the key that holds the study, and the stops that stand. */
export function StopPanel(props: {
  studyId: string;
  rules: string;
  lifts: boolean;
  stops: Stop[];
}) {
  const { studyId, rules, lifts, stops } = props;
  const [mine, setMine] = useState<string | null>(null);
  const stop = useAction(stopStudyAction, { onDone: (s) => setMine(s.stopId) });
  const back = useAction(takeBackStopAction, { onDone: () => setMine(null) });
  return (
    <Plate
      title="Stop rules"
      actions={
        <Key kind="stop" pending={stop.pending} onClick={() => void stop.run({ studyId })}>
          Stop this study
        </Key>
      }
    >
      <p className="max-w-[800px] whitespace-pre-line">{rules}</p>
      {mine && stops.some((s) => s.id === mine) ? (
        <p className="mt-3 flex flex-wrap items-center gap-3" role="status">
          The study is held. People are told in ten seconds.
          <Key pending={back.pending} onClick={() => void back.run({ stopId: mine })}>
            It was a slip
          </Key>
        </p>
      ) : null}
      <ActionProblem problem={stop.problem ?? back.problem} />
      {stops.map((s) => (
        <StandingStop key={s.id} stop={s} lifts={lifts} />
      ))}
    </Plate>
  );
}

function StandingStop({ stop, lifts }: { stop: Stop; lifts: boolean }) {
  const [reason, setReason] = useState('');
  const lift = useAction(liftStopAction);
  return (
    <div className="mt-4 border-l-[3px] border-stop pl-4">
      <p className="font-semibold">
        {stop.by} pressed stop, {stop.at}.{' '}
        {stop.whole
          ? 'The whole study is held.'
          : `That preparation and every unstarted run at ${stop.dose} or above are held.`}
      </p>
      {lifts ? (
        <form
          className="mt-2 flex flex-wrap items-end gap-3"
          onSubmit={(event) => {
            event.preventDefault();
            void lift.run({ stopId: stop.id, reason });
          }}
        >
          <TextField
            id={`lift-${stop.id}`}
            label="Why it may go on"
            className="w-96 max-w-full"
            value={reason}
            onChange={(event) => setReason(event.target.value)}
            required
          />
          <Key type="submit" pending={lift.pending}>
            Lift the stop
          </Key>
        </form>
      ) : (
        <p className="text-ink2">Only the lab head lifts it.</p>
      )}
      <ActionProblem problem={lift.problem} />
    </div>
  );
}
