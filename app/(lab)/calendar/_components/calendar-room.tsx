'use client';

import clsx from 'clsx';
import { DateTime } from 'luxon';
import dynamic from 'next/dynamic';
import Link from 'next/link';
import { useRouter } from 'next/navigation';
import { useCallback, useMemo, useState } from 'react';
import type { OpenSpan } from '@/components/calendar/open-hours';
import { SessionList } from '@/components/calendar/session-list';
import type { CalendarPerson, CalendarSession } from '@/components/calendar/types';
import { ActionProblem, useAction } from '@/components/forms';
import { EmptyState, KeyLink, LoadingRibbon } from '@/components/ui';
import { ScrollRegion } from '@/components/ui/scroll-region';
import { moveSessionAction } from '../actions';
import type { ShownView } from '../range';

const SessionCalendar = dynamic(
  () => import('@/components/calendar/session-calendar').then((m) => m.SessionCalendar),
  {
    ssr: false,
    loading: () => (
      <div className="h-[860px] border border-rule bg-plate py-4">
        <LoadingRibbon size="card" what="drawing the calendar" />
      </div>
    ),
  },
);

type Props = {
  sessions: CalendarSession[];
  people: CalendarPerson[];
  zone: string;
  view: ShownView;
  date: string;
  who: 'everybody' | 'mine';
  studyId: string | null;
  mayAssign: boolean;
  /** this person may move some sessions, or is asked to have some of their own */
  mayMove: boolean;
  hasOwn: boolean;
  /** when anybody works in the shown span */
  open: OpenSpan[];
  /** "Berlin, UTC+1" */
  zoneWords: string;
};

const VIEWS: { view: ShownView; name: string }[] = [
  { view: 'day', name: 'Day' },
  { view: 'week', name: 'Week' },
  { view: 'month', name: 'Month' },
  { view: 'list', name: 'List' },
];

const WHOSE = [
  { who: 'everybody' as const, name: 'Everybody’s' },
  { who: 'mine' as const, name: 'Mine' },
];

function address(props: Pick<Props, 'view' | 'date' | 'who' | 'studyId'>): string {
  const query = new URLSearchParams({ view: props.view, date: props.date, who: props.who });
  if (props.studyId) query.set('study', props.studyId);
  return `/calendar?${query}`;
}

/** Views, steps through time, and the sessions; a refused move says why and changes nothing. */
export function CalendarRoom(props: Props) {
  const { sessions, people, zone, view, date, who, mayAssign } = props;
  const router = useRouter();
  const [said, setSaid] = useState('');
  const onDone = useCallback(
    (moved: { moved: number }) => {
      const others = moved.moved - 1;
      setSaid(
        others > 0
          ? `Moved, with ${others} later ${others === 1 ? 'session' : 'sessions'} of the run.`
          : 'Moved.',
      );
      router.refresh();
    },
    [router],
  );
  const [asked, setAsked] = useState(0);
  const { run, problem, pending } = useAction(moveSessionAction, { onDone });
  const move = (session: CalendarSession, startsAt: string, personId?: string) => {
    setSaid('');
    setAsked(session.run);
    void run({
      sessionId: session.id,
      revision: session.revision,
      startsAt,
      ...(personId && personId !== session.personId ? { personId } : {}),
    });
  };
  const refusal = useMemo(
    () => problem && { ...problem, message: `Run ${asked} stays where it was. ${problem.message}` },
    [problem, asked],
  );
  return (
    <div className="mt-4 flex flex-col gap-4">
      <Steps {...props} />
      <div aria-live="polite" className="empty:hidden">
        {pending ? 'Asking whether it can be moved …' : said}
      </div>
      <ActionProblem problem={refusal} />
      {sessions.length === 0 && view === 'list' ? (
        <EmptyState
          title="No sessions in this week"
          action={<KeyLink href="/studies">To the studies</KeyLink>}
        >
          {who === 'mine'
            ? 'None of yours; others may have some.'
            : 'An approved series brings them.'}
        </EmptyState>
      ) : view === 'list' ? (
        <SessionList
          sessions={sessions}
          people={people}
          zone={zone}
          mayAssign={mayAssign}
          onMove={move}
        />
      ) : (
        <ScrollRegion label="Sessions by time">
          <div className={view === 'day' ? undefined : 'min-w-[700px]'}>
            <SessionCalendar
              sessions={sessions}
              zone={zone}
              view={view}
              open={props.open}
              date={DateTime.fromISO(date, { zone }).plus({ hours: 12 }).toISO() ?? date}
              onMove={move}
              onOpen={(s) => router.push(`/sessions/${s.id}`)}
              onDay={(d) => router.push(address({ ...props, view: 'day', date: d }))}
            />
          </div>
        </ScrollRegion>
      )}
    </div>
  );
}

function Steps(props: Props) {
  const { view, date, zone, who } = props;
  const unit = view === 'list' ? 'weeks' : (`${view}s` as 'days' | 'weeks' | 'months');
  const day = DateTime.fromISO(date, { zone });
  const at = (steps: number) => day.plus({ [unit]: steps }).toISODate() ?? date;
  const today = DateTime.now().setZone(zone).toISODate() ?? date;
  const key =
    'press inline-flex min-h-10 items-center border border-edge px-3 pointer-coarse:min-h-12';
  return (
    <div className="flex flex-wrap items-center gap-x-6 gap-y-3 print:hidden">
      <nav aria-label="View" className="flex">
        {VIEWS.map((v) => (
          <Link
            key={v.view}
            href={address({ ...props, view: v.view })}
            aria-current={v.view === view ? 'page' : undefined}
            className={clsx(
              key,
              '-ml-px first:ml-0',
              v.view === view ? 'bg-selected font-bold' : 'text-ink2 hover:text-ink',
            )}
          >
            {v.name}
          </Link>
        ))}
      </nav>
      <nav aria-label="Time" className="flex items-center gap-2">
        <Link className={key} href={address({ ...props, date: at(-1) })}>
          Earlier
        </Link>
        <Link className={key} href={address({ ...props, date: today })}>
          Now
        </Link>
        <Link className={key} href={address({ ...props, date: at(1) })}>
          Later
        </Link>
      </nav>
      {props.hasOwn ? (
        <nav aria-label="Whose" className="flex">
          {WHOSE.map((w) => (
            <Link
              key={w.who}
              href={address({ ...props, who: w.who })}
              aria-current={w.who === who ? 'page' : undefined}
              className={clsx(
                key,
                '-ml-px first:ml-0',
                w.who === who ? 'bg-selected font-bold' : 'text-ink2 hover:text-ink',
              )}
            >
              {w.name}
            </Link>
          ))}
        </nav>
      ) : null}
      <p className="text-caption text-ink2">
        {`Times of ${props.zoneWords}.`}
        {props.mayMove && view !== 'list'
          ? ' Drag a block to move it; the list does the same by keyboard.'
          : ''}
      </p>
    </div>
  );
}
