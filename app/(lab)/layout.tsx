import { DateTime } from 'luxon';
import type { ReactNode } from 'react';
import { DayRule, Places, SkipLink } from '@/components/frame';
import { sessionsBetween } from '@/db/queries/calendar';
import { hoursOfLab } from '@/db/queries/people';
import { waitingFor } from '@/db/queries/waiting';
import { openIntervals } from '@/lib/planner/lay-out/hours';
import { database } from '@/lib/server/database';
import { type Member, pageMember } from '@/lib/server/member';
import { signOut } from './sign-out';

/** The lab's day: sessions of everybody, and the hours in which anybody works. */
async function dayOf(member: Member, now: Date) {
  const zone = member.lab.timeZone;
  const start = DateTime.fromJSDate(now, { zone }).startOf('day');
  const from = start.toJSDate();
  const to = start.plus({ days: 1 }).toJSDate();
  const [sessions, hours] = await Promise.all([
    sessionsBetween(database(), { labId: member.labId, from, to }),
    hoursOfLab(database(), { labId: member.labId }),
  ]);
  const working = hours.filter((h) => h.userId !== null);
  return {
    sessions: sessions
      .filter((s) => s.state !== 'cancelled')
      .map((s) => ({
        id: s.id,
        from: s.startsAt.toISOString(),
        to: s.endsAt.toISOString(),
        mine: s.personId === member.userId,
        title: `${s.study}, run ${s.runNumber}`,
      })),
    open: openIntervals(
      working.map(({ rrule, from: f, to: t }) => ({ rrule, from: f, to: t })),
      zone,
      from.toISOString(),
      to.toISOString(),
    ),
  };
}

/** Frame of every page after sign-in: the day rule, then the places. */
export default async function LabLayout({ children }: { children: ReactNode }) {
  const member = await pageMember();
  const now = new Date();
  const [day, waiting] = await Promise.all([
    dayOf(member, now),
    waitingFor(database(), {
      labId: member.labId,
      userId: member.userId,
      role: member.role,
      now,
    }),
  ]);
  return (
    <>
      <SkipLink />
      <DayRule now={now.toISOString()} zone={member.lab.timeZone} {...day} />
      <Places
        waiting={waiting.length}
        waitingHref="/today#waiting"
        name={member.name}
        role={member.role}
        signOut={signOut}
      />
      {children}
    </>
  );
}
