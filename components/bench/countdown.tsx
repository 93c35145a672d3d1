'use client';

import clsx from 'clsx';
import type { ReactNode } from 'react';
import { useNow } from '@/components/ui/use-now';
import { clockText, countdown, durationText } from '@/lib/format';
import { TimeTrack } from './time-track';

export type CountdownProps = {
  /** the server's instant, ISO */
  now: string;
  zone: string;
  /** what is counted to: "the sample" */
  what: string;
  /** ISO instants */
  due: string;
  earliest: string;
  latest: string;
  /** the track's ends; the stretch from the last act to well past the window */
  trackFrom: string;
  trackTo: string;
};

const DAY = 86_400;

/** Counter of 128 px, the words beside it, and the straight track of the time around it. */
export function Countdown(props: CountdownProps) {
  const now = useNow(props.now, 1000);
  const at = (iso: string) => Date.parse(iso);
  const due = at(props.due);
  const seconds = (due - now) / 1000;
  const { text, over } = countdown(seconds);
  const late = now > at(props.latest);
  const words = over
    ? late
      ? `past the window of ${props.what}, due at`
      : `since ${props.what} was due at`
    : `until ${props.what} is due at`;
  const far = Math.abs(seconds) >= DAY;
  return (
    <>
      <div className="grid items-center gap-x-4 gap-y-2 tablet:grid-cols-[400px_minmax(0,1fr)]">
        <p
          role="timer"
          className={clsx(
            'font-mono leading-none font-semibold',
            far && 'text-instruction',
            !far && text.length > 5 && 'text-[clamp(56px,11vw,88px)]',
            !far &&
              text.length <= 5 &&
              '-ml-1.5 text-[clamp(80px,15.65vw,128px)] tracking-[-0.07em]',
          )}
        >
          {far ? durationText(Math.abs(seconds) / 60) : text}
        </p>
        <p className="pt-1 text-bench-key">
          {words} <span className="font-mono">{clockText(due, props.zone)}</span>
          <WindowWords earliest={at(props.earliest)} due={due} latest={at(props.latest)} />
        </p>
      </div>
      <TimeTrack
        from={at(props.trackFrom)}
        to={at(props.trackTo)}
        now={now}
        due={due}
        earliest={at(props.earliest)}
        latest={at(props.latest)}
      />
    </>
  );
}

type WindowProps = { earliest: number; due: number; latest: number };

function WindowWords({ earliest, due, latest }: WindowProps): ReactNode {
  const before = (due - earliest) / 60_000;
  const after = (latest - due) / 60_000;
  const same = Math.abs(before - after) < 0.5;
  return (
    <span className="block text-ink2">
      {same
        ? `${durationText(after)} either side is on time`
        : `${durationText(before)} before to ${durationText(after)} after is on time`}
    </span>
  );
}
