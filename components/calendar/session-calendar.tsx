'use client';

import { DateTime, Settings } from 'luxon';
import { useMemo } from 'react';
import { Calendar, luxonLocalizer } from 'react-big-calendar';
import withDragAndDrop from 'react-big-calendar/lib/addons/dragAndDrop';
import { SessionBlock } from './session-block';
import type { CalendarSession, CalendarView } from './types';
import './calendar.css';

type Event = { session: CalendarSession; start: Date; end: Date; title: string };
const DragCalendar = withDragAndDrop<Event>(Calendar);
const STEP_MINUTES = 30;

type Props = {
  sessions: CalendarSession[];
  zone: string;
  view: CalendarView;
  /** A moment of the shown day, week or month. */
  date: string;
  onMove: (session: CalendarSession, startsAt: string) => void;
  onOpen: (session: CalendarSession) => void;
};

const Block = ({ event }: { event: Event }) => <SessionBlock session={event.session} />;

/** The lab's sessions by day, week or month, in the lab's zone; blocks are dragged to move them. */
export function SessionCalendar({ sessions, zone, view, date, onMove, onOpen }: Props) {
  const localizer = useMemo(() => {
    Settings.defaultZone = zone;
    Settings.defaultLocale = 'en-GB';
    return luxonLocalizer(DateTime, { firstDayOfWeek: 1 });
  }, [zone]);
  const events = useMemo(
    () =>
      sessions.map((session) => ({
        session,
        start: new Date(session.from),
        end: new Date(session.to),
        title: `${session.study}, run ${session.run}, ${session.dose}, ${session.person}`,
      })),
    [sessions],
  );
  const morning = DateTime.fromISO(date, { zone }).set({ hour: 7, minute: 0 }).toJSDate();
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
      timeslots={2}
      popup
      resizable={false}
      draggableAccessor={(event) => event.session.movable}
      scrollToTime={morning}
      formats={{
        timeGutterFormat: 'HH:mm',
        eventTimeRangeFormat: () => '',
        dayFormat: 'ccc d',
        weekdayFormat: 'ccc',
        dateFormat: 'd',
      }}
      components={{ event: Block }}
      eventPropGetter={() => ({ className: 'session-event' })}
      onEventDrop={({ event, start }) => {
        const at = new Date(start);
        // A drop on a day of the month view keeps the time of day.
        const kept =
          view === 'month'
            ? DateTime.fromJSDate(at, { zone })
                .set({
                  hour: DateTime.fromJSDate(event.start, { zone }).hour,
                  minute: DateTime.fromJSDate(event.start, { zone }).minute,
                })
                .toJSDate()
            : at;
        onMove(event.session, kept.toISOString());
      }}
      onSelectEvent={(event) => onOpen(event.session)}
      style={{ height: view === 'month' ? 720 : 860 }}
    />
  );
}
