import clsx from 'clsx';
import { TextureStrip } from '@/components/marks';
import { clockText, spanText, zoned } from '@/lib/format';
import type { CalendarSession } from './types';

const STATE_WORDS: Record<CalendarSession['state'], string> = {
  planned: '',
  started: 'started',
  done: 'done',
  missed: 'missed',
  suspended: 'held by a stop',
  cancelled: 'cancelled',
};

/** All of a session in one line, for the reader and the pointer that rests. */
export function sessionInWords(session: CalendarSession, zone: string): string {
  const day = zoned(session.from, zone).toFormat('cccc d LLLL');
  return [
    `${day}, ${spanText(session.from, session.to, zone)}`,
    session.dose,
    `${session.study}, run ${session.run}`,
    session.what,
    session.rig,
    session.person,
    STATE_WORDS[session.state],
  ]
    .filter(Boolean)
    .join('; ');
}

type BlockProps = {
  session: CalendarSession;
  zone: string;
  /** lines of text that fit; one in a short block and in the month */
  lines: 1 | 2 | 3;
  /** the month has no hours to read the time from */
  timed?: boolean;
};

/** A block of the calendar: 20 px of texture by place on the ribbon, then text on plate. */
export function SessionBlock({ session, zone, lines, timed }: BlockProps) {
  const done = session.state === 'done' || session.state === 'started';
  const held = session.state === 'suspended';
  const place = `run ${session.run}, ${session.study}`;
  const state = STATE_WORDS[session.state];
  const words = sessionInWords(session, zone);
  const person = state ? `${session.person}, ${state}` : session.person;
  return (
    <div
      title={words}
      className={clsx(
        'flex h-full overflow-hidden border bg-plate text-ink',
        done ? 'border-ink' : 'border-edge',
        held && 'border-dashed border-stop',
      )}
    >
      <span className="sr-only">{words}</span>
      <div className="w-5 shrink-0">
        <TextureStrip state={held ? 'stopped' : session.place} />
      </div>
      <div aria-hidden="true" className="min-w-0 flex-1 pl-1 text-caption leading-[18px]">
        <span className="flex whitespace-pre">
          {timed ? (
            <span className="shrink-0 font-mono">{clockText(session.from, zone)} </span>
          ) : null}
          <span className={clsx('shrink-0', done ? 'font-bold' : 'font-semibold')}>
            {session.dose}
          </span>
          {lines === 1 ? <span className="truncate">{`, ${place}, ${person}`}</span> : null}
        </span>
        {lines > 1 ? <span className="block truncate">{place}</span> : null}
        {lines > 2 ? <span className="block truncate text-ink2">{person}</span> : null}
      </div>
    </div>
  );
}
