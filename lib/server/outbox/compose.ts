import { DateTime } from 'luxon';
import type { MailFacts, SessionFacts } from './facts';
import { type Appointment, invitation } from './invitation';

export type Mail = {
  subject: string;
  text: string;
  html: string;
  ical?: { method: string; content: string };
};

const escapeHtml = (s: string) =>
  s
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;');

/** "Thu 3 December 2026, 09:30–10:00, Europe/Berlin (UTC+1)": time, zone and offset in words. */
export function whenInWords(from: Date, to: Date, zone: string): string {
  const start = DateTime.fromJSDate(from, { zone });
  const end = DateTime.fromJSDate(to, { zone });
  const day = start.setLocale('en-GB').toFormat('ccc d LLLL yyyy');
  const until = end.hasSame(start, 'day') ? end.toFormat('HH:mm') : end.toFormat('ccc HH:mm');
  const clock = start.toFormat('HH:mm');
  // Across a clock change one offset would be a lie.
  if (start.offset !== end.offset) {
    return `${day}, ${clock} (${utcOffset(start)}) – ${until} (${utcOffset(end)}), ${zone}`;
  }
  return `${day}, ${clock}–${until}, ${zone} (${utcOffset(start)})`;
}

function utcOffset(time: DateTime): string {
  const minutes = time.offset;
  const sign = minutes < 0 ? '−' : '+';
  const hours = Math.floor(Math.abs(minutes) / 60);
  const rest = Math.abs(minutes) % 60;
  return `UTC${sign}${hours}${rest ? `:${String(rest).padStart(2, '0')}` : ''}`;
}

const appointment = (s: SessionFacts, link: string): Appointment => ({
  sessionId: s.id,
  sequence: s.sequence,
  startsAt: s.startsAt,
  endsAt: s.endsAt,
  title: `${s.study}, ${s.rig}`,
  place: s.place,
  description: `${s.what.join('\n')}\n${link}`,
  cancelled: s.state === 'cancelled' || s.state === 'suspended',
});

function sessionLines(facts: MailFacts, base: string): string[] {
  return facts.sessions.flatMap((s) => [
    `${whenInWords(s.startsAt, s.endsAt, facts.lab.timeZone)}`,
    `  ${s.rig}, ${s.place}`,
    ...s.what.map((w) => `  ${w}`),
    `  ${base}/sessions/${s.id}`,
  ]);
}

const text = (value: unknown) => (typeof value === 'string' ? value : '');

function inWords(minutes: number): string {
  if (minutes >= 24 * 60) return 'tomorrow';
  return minutes >= 60 ? `in ${Math.round(minutes / 60)} h` : `in ${minutes} min`;
}

/** Subject and first lines by kind; the sessions concerned follow. */
function opening(facts: MailFacts, base: string): { subject: string; lines: string[] } {
  const title = facts.study?.title ?? facts.sessions[0]?.study ?? facts.lab.name;
  const studyLink = facts.study ? `${base}/studies/${facts.study.id}` : base;
  const said = text(facts.data.said);
  const by = text(facts.data.by);
  switch (facts.kind) {
    case 'reminder':
      return {
        subject: `${inWords(Number(facts.data.offsetMinutes))}: ${title}`,
        lines: ['A session of yours is coming.'],
      };
    case 'assigned':
      return {
        subject: `${facts.sessions.length === 1 ? 'A session' : `${facts.sessions.length} sessions`} for you: ${title}`,
        lines: ['These sessions are yours. The attached file puts them into your calendar.'],
      };
    case 'moved':
      return {
        subject: `Moved: ${title}`,
        lines: [`${by} moved a session of yours${said ? ` (was ${said})` : ''}. It is now:`],
      };
    case 'cancelled':
      return {
        subject: `Cancelled: ${title}`,
        lines: [`${by} cancelled a session of yours${said ? `: ${said}` : ''}.`],
      };
    case 'stop':
      return {
        subject: `Stop: ${title}`,
        lines: [`${by} pressed stop. ${said}`, 'Only the lab head can lift it.', studyLink],
      };
    case 'approval asked':
      return {
        subject: `For your approval: ${title}`,
        lines: [`${by} asks you to approve ${said}.`, `${studyLink}/series`],
      };
    case 'approved':
      return {
        subject: `Approved: ${title}`,
        lines: [`${by} approved ${said}.`, `${studyLink}/series`],
      };
    case 'sent back':
      return {
        subject: `Sent back: ${title}`,
        lines: [`${by} sent the series back: ${said}`, `${studyLink}/series`],
      };
  }
}

/** Text, HTML and calendar part of one mail. `base` is the address people type. */
export function compose(facts: MailFacts, base: string, now: Date): Mail {
  const { subject, lines } = opening(facts, base);
  const body = [
    `${facts.recipient.name},`,
    '',
    ...lines,
    ...(facts.sessions.length ? ['', ...sessionLines(facts, base)] : []),
    '',
    `${facts.lab.name}${facts.lab.demo ? ' (invented demo lab)' : ''}`,
  ];
  const html = `<div style="font-family:sans-serif;font-size:15px;line-height:22px">${body
    .map((l) => {
      const safe = escapeHtml(l);
      if (/^\s*https?:\/\//.test(l)) return `<a href="${safe.trim()}">${safe.trim()}</a><br>`;
      return `${safe.replace(/^ {2}/, '&emsp;')}<br>`;
    })
    .join('\n')}</div>`;
  const ical = facts.sessions.length
    ? invitation(
        facts.sessions.map((s) => appointment(s, `${base}/sessions/${s.id}`)),
        now,
      )
    : undefined;
  return { subject, text: body.join('\n'), html, ical };
}
