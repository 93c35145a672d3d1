'use client';

import clsx from 'clsx';
import { DateTime, Settings } from 'luxon';
import { useMemo } from 'react';
import { Calendar, luxonLocalizer } from 'react-big-calendar';
import withDragAndDrop from 'react-big-calendar/lib/addons/dragAndDrop';
import { drawnEnd, isOpen, type OpenSpan } from './open-hours';
import { SessionBlock } from './session-block';
import type { CalendarSession, CalendarView } from './types';
import './calendar.css';

type Event = { session: CalendarSession; start: Date; end: Date };
const DragCalendar = withDragAndDrop<Event>(Calendar);
/** A row of 20 px: one line of text, and the step of a drag. */
const STEP_MINUTES = 15;
const ROWS_AN_HOUR = 4;

type Props = {
  sessions: CalendarSession[];
  zone: string;
  view: CalendarView;
  /** A moment of the shown day, week or month. */
  date: string;
  /** when anybody works; all else is hatched */
  open: OpenSpan[];
  onMove: (session: CalendarSession, startsAt: string) => void;
  onOpen: (session: CalendarSession) => void;
  /** a day's name or its "5 more" was pressed; the date in the lab's zone */
  onDay: (date: string) => void;
};

/** A drop on a day of the month keeps the time of day. */
function keptTime(from: Date, day: Date, zone: string): Date {
  const { hour, minute } = DateTime.fromJSDate(from, { zone });
  return DateTime.fromJSDate(day, { zone }).set({ hour, minute }).toJSDate();
}

function blocksOf(zone: string) {
  const timed = ({ event }: { event: Event }) => {
    const rows = Math.floor(
      (event.end.getTime() - event.start.getTime()) / (STEP_MINUTES * 60_000),
    );
    return (
      <SessionBlock session={event.session} zone={zone} lines={rows >= 3 ? 3 : rows >= 2 ? 2 : 1} />
    );
  };
  const inMonth = ({ event }: { event: Event }) => (
    <SessionBlock session={event.session} zone={zone} lines={1} timed />
  );
  return { event: timed, month: { event: inMonth } };
}

/** The lab's sessions by day, week or month, in the lab's zone; blocks are dragged to move them. */
export function SessionCalendar(props: Props) {
  const { sessions, zone, view, date, open, onMove, onOpen, onDay } = props;
  const localizer = useMemo(() => {
    Settings.defaultZone = zone;
    Settings.defaultLocale = 'en-GB';
    return luxonLocalizer(DateTime, { firstDayOfWeek: 1 });
  }, [zone]);
  const components = useMemo(() => blocksOf(zone), [zone]);
  const events = useMemo(
    () =>
      sessions.map((session) => {
        const start = new Date(session.from);
        return { session, start, end: drawnEnd(start, new Date(session.to)) };
      }),
    [sessions],
  );
  const morning = DateTime.fromISO(date, { zone }).set({ hour: 6, minute: 30 }).toJSDate();
  return (
    <DragCalendar
      localizer={localizer}
      events={events}
      view={view}
      onView={() => {}}
      views={['day', 'week', 'month']}
      date={new Date(date)}
      onNavigate={() => {}}
      toolbar={false}
      step={STEP_MINUTES}
      timeslots={ROWS_AN_HOUR}
      dayLayoutAlgorithm="no-overlap"
      doShowMoreDrillDown
      onDrillDown={(day) => onDay(DateTime.fromJSDate(day, { zone }).toISODate() ?? date)}
      resizable={false}
      draggableAccessor={(event) => event.session.movable}
      tooltipAccessor={() => ''}
      scrollToTime={morning}
      formats={{
        timeGutterFormat: 'HH:mm',
        eventTimeRangeFormat: () => '',
        dayFormat: 'ccc d',
        weekdayFormat: 'ccc',
        dateFormat: 'd',
        dayHeaderFormat: 'cccc d LLLL',
      }}
      messages={{ showMore: (count) => `${count} more` }}
      components={components}
      slotPropGetter={(at) => (isOpen(at, open) ? {} : { className: 'closed-slot' })}
      eventPropGetter={(event) => ({
        className: clsx('session-event', event.session.movable && 'movable-event'),
      })}
      onEventDrop={({ event, start }) => {
        const at = new Date(start);
        const kept = view === 'month' ? keptTime(event.start, at, zone) : at;
        if (kept.getTime() !== event.start.getTime()) onMove(event.session, kept.toISOString());
      }}
      onSelectEvent={(event) => onOpen(event.session)}
      onKeyPressEvent={(event, press) => {
        const { key } = press as unknown as KeyboardEvent;
        if (key === 'Enter' || key === ' ') onOpen(event.session);
      }}
      style={{ height: view === 'month' ? 760 : 860 }}
    />
  );
}
