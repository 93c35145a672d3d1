import clsx from 'clsx';
import { TextureStrip } from '@/components/marks';
import type { CalendarSession } from './types';

/** A block of the calendar: 20 px of texture by place on the ribbon, then text on plate. */
export function SessionBlock({ session }: { session: CalendarSession }) {
  const done = session.state === 'done' || session.state === 'started';
  const held = session.state === 'suspended';
  return (
    <div
      className={clsx(
        'flex h-full min-h-5 overflow-hidden border bg-plate text-ink',
        done ? 'border-ink' : 'border-edge',
        held && 'border-dashed border-stop',
      )}
    >
      <div className="w-5 shrink-0">
        <TextureStrip state={held ? 'stopped' : session.place} />
      </div>
      <div className="min-w-0 px-1 text-caption leading-4">
        <span className={clsx('block truncate', done ? 'font-bold' : 'font-semibold')}>
          {session.dose}
        </span>
        <span className="block truncate">
          {session.study}, run {session.run}
        </span>
        <span className="block truncate text-ink2">
          {session.person}
          {held ? ', held by a stop' : ''}
          {session.state === 'done' ? ', done' : ''}
        </span>
      </div>
    </div>
  );
}
