import { DateTime } from 'luxon';
import type { Metadata } from 'next';
import { withoutClosures } from '@/components/calendar/open-hours';
import type { CalendarSession } from '@/components/calendar/types';
import { PageBody, PageHead } from '@/components/frame';
import { sessionsBetween, visitsOfSessions } from '@/db/queries/calendar';
import { absences, hoursOfLab, people } from '@/db/queries/people';
import { onsetsOfStudies, placeOnRibbon } from '@/db/queries/ribbon-places';
import { figure, withUnit, zoneText } from '@/lib/format';
import { openIntervals } from '@/lib/planner/lay-out/hours';
import { authorise } from '@/lib/server/authorise';
import { database } from '@/lib/server/database';
import { type Member, pageMember } from '@/lib/server/member';
import { CalendarRoom } from './_components/calendar-room';
import { readRange, type ShownRange } from './range';

export const metadata: Metadata = { title: 'Calendar' };

async function shownSessions(member: Member, range: ShownRange): Promise<CalendarSession[]> {
  const db = database();
  const labId = member.labId;
  const rows = await sessionsBetween(db, {
    labId,
    from: range.from,
    to: range.to,
    ...(range.who === 'mine' ? { personId: member.userId } : {}),
    ...(range.studyId ? { studyId: range.studyId } : {}),
  });
  const shown = rows.filter((s) => s.state !== 'cancelled');
  const [visits, onsets] = await Promise.all([
    visitsOfSessions(db, { labId, sessionIds: shown.map((s) => s.id) }),
    onsetsOfStudies(db, { labId, studyIds: [...new Set(shown.map((s) => s.studyId))] }),
  ]);
  const allowance = authorise(member.role, 'move session');
  return shown.map((s) => ({
    id: s.id,
    revision: s.revision,
    studyId: s.studyId,
    study: s.study,
    simulated: s.simulated,
    rigId: s.rigId,
    rig: s.rig,
    personId: s.personId,
    person: s.person,
    from: s.startsAt.toISOString(),
    to: s.endsAt.toISOString(),
    state: s.state,
    run: s.runNumber,
    dose: withUnit(figure(s.dose), s.doseUnit),
    what: visits
      .filter((v) => v.sessionId === s.id)
      .map((v) => v.visit.label)
      .join(', '),
    place: placeOnRibbon(
      onsets.filter((o) => o.studyId === s.studyId),
      s.control,
    ),
    movable:
      s.state === 'planned' &&
      (allowance === 'yes' || (allowance === 'own' && s.personId === member.userId)),
  }));
}

/** The hours in which anybody works, without the days on which the lab is closed. */
async function openHours(member: Member, range: ShownRange) {
  const of = { labId: member.labId };
  const [hours, away] = await Promise.all([
    hoursOfLab(database(), of),
    absences(database(), { ...of, since: range.from }),
  ]);
  const open = openIntervals(
    hours.filter((h) => h.userId !== null).map(({ rrule, from, to }) => ({ rrule, from, to })),
    member.lab.timeZone,
    range.from.toISOString(),
    range.to.toISOString(),
  );
  const closures = away
    .filter((a) => a.userId === null)
    .map((a) => ({ from: a.from.toISOString(), to: a.to.toISOString() }));
  const iso = (text: string) => new Date(text).toISOString();
  return withoutClosures(
    open.map((o) => ({ from: iso(o.from), to: iso(o.to) })),
    closures,
  );
}

export default async function CalendarPage({
  searchParams,
}: {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}) {
  const member = await pageMember();
  const zone = member.lab.timeZone;
  const range = readRange(await searchParams, zone, new Date());
  const [sessions, staff, open] = await Promise.all([
    shownSessions(member, range),
    people(database(), { labId: member.labId }),
    openHours(member, range),
  ]);
  const title = DateTime.fromISO(range.date, { zone }).setLocale('en-GB');
  return (
    <PageBody>
      <PageHead
        title="Calendar"
        subtitle={
          range.view === 'day'
            ? title.toFormat('cccc d LLLL yyyy')
            : range.view === 'month'
              ? title.toFormat('LLLL yyyy')
              : `week ${title.weekNumber}, ${title.toFormat('LLLL yyyy')}`
        }
      />
      <CalendarRoom
        sessions={sessions}
        people={staff
          .filter((p) => p.role !== 'observer')
          .map((p) => ({ id: p.userId, name: p.name }))}
        zone={zone}
        view={range.view}
        date={range.date}
        who={range.who}
        studyId={range.studyId}
        mayAssign={authorise(member.role, 'move session') === 'yes'}
        mayMove={sessions.some((s) => s.movable)}
        hasOwn={member.role !== 'observer'}
        open={open}
        zoneWords={zoneText(range.from, zone)}
      />
    </PageBody>
  );
}
