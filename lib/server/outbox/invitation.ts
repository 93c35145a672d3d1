import ical, { ICalCalendarMethod, ICalEventStatus } from 'ical-generator';

export type Appointment = {
  sessionId: string;
  sequence: number;
  startsAt: Date;
  endsAt: Date;
  title: string;
  place: string;
  description: string;
  cancelled: boolean;
};

/** RFC 5545 text of one or more appointments; UIDs are stable for a session's life. */
export function invitation(
  appointments: Appointment[],
  now: Date,
): {
  method: 'REQUEST' | 'CANCEL' | 'PUBLISH';
  content: string;
} {
  const single = appointments.length === 1 ? appointments[0] : undefined;
  const method = single ? (single.cancelled ? 'CANCEL' : 'REQUEST') : 'PUBLISH';
  const calendar = ical({
    prodId: { company: 'Swaypoint', product: 'Swaypoint', language: 'EN' },
    method: ICalCalendarMethod[method],
  });
  for (const a of appointments) {
    calendar.createEvent({
      id: `${a.sessionId}@swaypoint`,
      sequence: a.sequence,
      stamp: now,
      start: a.startsAt,
      end: a.endsAt,
      summary: a.title,
      location: a.place,
      description: a.description,
      status: a.cancelled ? ICalEventStatus.CANCELLED : ICalEventStatus.CONFIRMED,
    });
  }
  return { method, content: calendar.toString() };
}
