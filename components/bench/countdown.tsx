'use client';

import clsx from 'clsx';
import { useNow } from '@/components/ui/use-now';
import { clockText, countdown, durationText, zoned } from '@/lib/format';
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
  /** smaller figures, where a caution and a field need the room */
  tight?: boolean;
};

const HOUR = 3600;
/** Below this a side of the window counts as none. */
const NO_LEEWAY_MS = 30_000;

/** Counter of 128 px (beyond an hour in words), what it counts to beside it, and the straight track of the time around it. */
export function Countdown(props: CountdownProps) {
  const now = useNow(props.now, 1000);
  const at = (iso: string) => Date.parse(iso);
  const due = at(props.due);
  const seconds = (due - now) / 1000;
  const { text, over } = countdown(seconds);
  // A visit without leeway has no window to be past; its run counts from when it was made.
  const leeway = at(props.latest) - due >= NO_LEEWAY_MS || due - at(props.earliest) >= NO_LEEWAY_MS;
  const late = leeway && now > at(props.latest);
  const words = over
    ? late
      ? `past the window of ${props.what}, due at`
      : `since ${props.what} was due at`
    : `until ${props.what} is due at`;
  const far = Math.abs(seconds) >= HOUR;
  return (
    <>
      <div className="grid items-center gap-x-4 gap-y-2 tablet:grid-cols-[400px_minmax(0,1fr)]">
        <p
          role="timer"
          className={clsx(
            'leading-none font-semibold whitespace-nowrap',
            far
              ? 'py-2 text-[48px] tablet:text-[64px]'
              : props.tight
                ? 'font-mono text-[clamp(72px,10.8vw,88px)] tracking-[-0.07em]'
                : '-ml-1.5 font-mono text-[clamp(80px,15.65vw,128px)] tracking-[-0.07em]',
          )}
        >
          {far ? durationText(Math.floor(Math.abs(seconds) / 60)) : text}
        </p>
        <p className="pt-1 text-bench-key">
          {words}{' '}
          <span className="font-mono whitespace-nowrap">{momentText(due, now, props.zone)}</span>
          <span className="block text-ink2">
            {windowWords({ earliest: at(props.earliest), due, latest: at(props.latest) }, (t) =>
              momentText(t, due, props.zone),
            )}
          </span>
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

/** "14:36", with the day before it when that is not the day of `beside`. */
function momentText(at: number, beside: number, zone: string): string {
  const moment = zoned(at, zone);
  if (moment.hasSame(zoned(beside, zone), 'day')) return clockText(at, zone);
  return moment.toFormat('ccc d LLL, HH:mm');
}

type Window = { earliest: number; due: number; latest: number };

/** What still counts as on time: "10 min either side is on time"; nothing without any leeway. */
export function windowWords(window: Window, moment: (at: number) => string): string {
  const { earliest, due, latest } = window;
  const before = due - earliest;
  const after = latest - due;
  if (before < NO_LEEWAY_MS && after < NO_LEEWAY_MS) return '';
  if (before < NO_LEEWAY_MS) return `until ${moment(latest)} is on time`;
  if (after < NO_LEEWAY_MS) return `from ${moment(earliest)} is on time`;
  if (Math.abs(before - after) < NO_LEEWAY_MS) {
    return `${durationText(after / 60_000)} either side is on time`;
  }
  return `${moment(earliest)} to ${moment(latest)} is on time`;
}
