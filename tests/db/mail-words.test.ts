import ICAL from 'ical.js';
import { describe, expect, it } from 'vitest';
import { compose, whenInWords } from '@/lib/server/outbox/compose';
import type { MailFacts } from '@/lib/server/outbox/facts';
import { invitation } from '@/lib/server/outbox/invitation';

const appointment = {
  sessionId: '01900000-0000-7000-8000-000000000001',
  sequence: 2,
  startsAt: new Date('2026-10-25T00:30:00Z'),
  endsAt: new Date('2026-10-25T01:15:00Z'),
  title: 'Plankton at rising dilution with a very long title that has to be folded, Kühlraum',
  place: 'Room 2.14; cold side, left',
  description: 'Run 7: Sample 3 of 9\nhttp://127.0.0.1/sessions/1',
  cancelled: false,
};

const facts = (over: Partial<MailFacts>): MailFacts => ({
  kind: 'reminder',
  data: { offsetMinutes: 60 },
  recipient: { name: 'Mira Okafor', email: 'mira@example.org' },
  lab: { name: 'Lab <A>', place: 'Berlin', timeZone: 'Europe/Berlin', demo: false },
  study: { id: 's1', title: 'Plankton & rotifers' },
  sessions: [
    {
      id: appointment.sessionId,
      state: 'planned',
      sequence: 2,
      startsAt: appointment.startsAt,
      endsAt: appointment.endsAt,
      personId: 'p',
      study: 'Plankton & rotifers',
      rig: 'Chemostat bench',
      place: 'Room 2.14',
      what: ['Run 7: Sample 3 of 9'],
    },
  ],
  ...over,
});

describe('calendar parts of mails, read by an independent parser', () => {
  it('carry a stable UID, the sequence, UTC instants and the words whole', () => {
    const { method, content } = invitation([appointment], new Date('2026-10-01T00:00:00Z'));
    expect(method).toBe('REQUEST');
    const calendar = new ICAL.Component(ICAL.parse(content));
    expect(calendar.getFirstPropertyValue('method')).toBe('REQUEST');
    const event = new ICAL.Event(calendar.getFirstSubcomponent('vevent')!);
    expect(event.uid).toBe(`${appointment.sessionId}@swaypoint`);
    expect(event.sequence).toBe(2);
    expect(event.startDate.toJSDate()).toEqual(appointment.startsAt);
    expect(event.endDate.toJSDate()).toEqual(appointment.endsAt);
    expect(event.summary).toBe(appointment.title);
    expect(event.location).toBe(appointment.place);
    expect(event.description).toBe(appointment.description);
  });

  it('fold lines by octets and end them with CRLF (RFC 5545, 3.1)', () => {
    const { content } = invitation([appointment], new Date('2026-10-01T00:00:00Z'));
    for (const line of content.split('\r\n')) {
      expect(Buffer.byteLength(line, 'utf8')).toBeLessThanOrEqual(75);
      expect(line).not.toContain('\n');
    }
  });

  it('cancel with METHOD:CANCEL and STATUS:CANCELLED', () => {
    const { content } = invitation([{ ...appointment, cancelled: true }], new Date());
    const calendar = new ICAL.Component(ICAL.parse(content));
    expect(calendar.getFirstPropertyValue('method')).toBe('CANCEL');
    const event = calendar.getFirstSubcomponent('vevent')!;
    expect(event.getFirstPropertyValue('status')).toBe('CANCELLED');
  });
});

describe('times in mails', () => {
  it('say weekday, date, clock, zone and offset, also where the clock goes back', () => {
    const words = whenInWords(appointment.startsAt, appointment.endsAt, 'Europe/Berlin');
    // 00:30 UTC is 02:30 summer time; 01:15 UTC is 02:15 winter time of the same night.
    expect(words).toBe('Sun 25 October 2026, 02:30 (UTC+2) – 02:15 (UTC+1), Europe/Berlin');
    const west = whenInWords(appointment.startsAt, appointment.endsAt, 'America/New_York');
    expect(west).toBe('Sat 24 October 2026, 20:30–21:15, America/New_York (UTC−4)');
  });
});

describe('mails in words', () => {
  it('escape what people wrote in the HTML part and keep it in the text part', () => {
    const mail = compose(facts({}), 'http://127.0.0.1:3000', new Date());
    expect(mail.subject).toBe('in 1 h: Plankton & rotifers');
    expect(mail.text).toContain('Lab <A>');
    expect(mail.html).toContain('Lab &lt;A&gt;');
    expect(mail.html).not.toContain('<A>');
    expect(mail.text).toContain(`http://127.0.0.1:3000/sessions/${appointment.sessionId}`);
    expect(mail.ical?.method).toBe('REQUEST');
  });

  it('tell of a stop without a calendar part', () => {
    const stop = facts({ kind: 'stop', data: { by: 'Jonas', said: 'All is held.' }, sessions: [] });
    const mail = compose(stop, 'http://127.0.0.1:3000', new Date());
    expect(mail.subject).toBe('Stop: Plankton & rotifers');
    expect(mail.text).toContain('Jonas pressed stop. All is held.');
    expect(mail.ical).toBeUndefined();
  });
});
