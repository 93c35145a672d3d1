import { DateTime } from 'luxon';
import type { Metadata } from 'next';
import { PageBody, PageHead } from '@/components/frame';
import { EmptyState, KeyLink } from '@/components/ui';
import { sessionsBetween, visitsOfSessions } from '@/db/queries/calendar';
import { onsetsOfStudies, placeOnRibbon } from '@/db/queries/ribbon-places';
import { waitingFor } from '@/db/queries/waiting';
import { figure, withUnit } from '@/lib/format';
import { database } from '@/lib/server/database';
import { type Member, may, pageMember } from '@/lib/server/member';
import { DueList, type DueRow } from './_components/due-list';
import { sortDue } from './_components/due-order';
import { WaitingList } from './_components/waiting-list';

export const metadata: Metadata = { title: 'Today' };

const DAYS_AHEAD = 7;
/** How far back a session that nobody began is still shown. */
const DAYS_BACK = 14;

/** The member's own sessions of these days; for those without any, the whole lab's. */
async function dueRows(member: Member, now: Date): Promise<{ rows: DueRow[]; mine: boolean }> {
  const db = database();
  const labId = member.labId;
  const start = DateTime.fromJSDate(now, { zone: member.lab.timeZone }).startOf('day');
  const span = {
    labId,
    from: start.minus({ days: DAYS_BACK }).toJSDate(),
    to: start.plus({ days: DAYS_AHEAD }).toJSDate(),
  };
  const all = (await sessionsBetween(db, span)).filter(
    (s) => s.state !== 'cancelled' && (s.state !== 'done' || s.endsAt > start.toJSDate()),
  );
  const own = all.filter((s) => s.personId === member.userId);
  const mine = own.length > 0 || member.role === 'technician';
  const shown = mine ? own : all;
  const [visits, onsets] = await Promise.all([
    visitsOfSessions(db, { labId, sessionIds: shown.map((s) => s.id) }),
    onsetsOfStudies(db, { labId, studyIds: [...new Set(shown.map((s) => s.studyId))] }),
  ]);
  const rows = shown.map((s) => {
    const own = visits.filter((v) => v.sessionId === s.id);
    return {
      id: s.id,
      from: s.startsAt.toISOString(),
      to: s.endsAt.toISOString(),
      state: s.state,
      study: s.study,
      run: s.runNumber,
      dose: withUnit(figure(s.dose, 4), s.doseUnit),
      what: own.map((v) => v.visit.label).join(', '),
      sinceDose: minutesSince(s.setAt ?? s.plannedStart, s.startsAt),
      rig: s.rig,
      person: s.person,
      place: placeOnRibbon(
        onsets.filter((o) => o.studyId === s.studyId),
        s.control,
      ),
    };
  });
  return { rows, mine };
}

const minutesSince = (zero: Date | null, at: Date) =>
  zero === null ? null : (at.getTime() - zero.getTime()) / 60_000;

/** One list: due, coming, waits for you. */
export default async function TodayPage() {
  const member = await pageMember();
  const now = new Date();
  const zone = member.lab.timeZone;
  const [{ rows, mine }, waiting] = await Promise.all([
    dueRows(member, now),
    waitingFor(database(), {
      labId: member.labId,
      userId: member.userId,
      role: member.role,
      now,
    }),
  ]);
  const day = DateTime.fromJSDate(now, { zone }).startOf('day');
  const { due, coming, done } = sortDue(rows, {
    now: now.toISOString(),
    dayStart: day.toJSDate().toISOString(),
    dayEnd: day.plus({ days: 1 }).toJSDate().toISOString(),
  });
  const shared = {
    zone,
    now: now.toISOString(),
    whole: !mine,
    records: may(member, 'record session'),
  };
  return (
    <PageBody>
      <PageHead
        title="Today"
        subtitle={
          mine ? `${member.name}, your sessions` : `${member.lab.name}, everybody’s sessions`
        }
      />
      <div className="mt-6 grid gap-8 desk:grid-cols-[minmax(0,2fr)_minmax(0,1fr)]">
        <div className="flex min-w-0 flex-col gap-8">
          {rows.length === 0 ? (
            <EmptyState
              title="Nothing is due in the next seven days"
              action={<KeyLink href="/calendar">To the calendar</KeyLink>}
            />
          ) : (
            <>
              <DueList title="Due" rows={due} empty="Nothing." {...shared} />
              <DueList title="Coming" rows={coming} {...shared} />
              <DueList title="Done today" rows={done} quiet {...shared} />
            </>
          )}
        </div>
        <WaitingList waiting={waiting} zone={zone} />
      </div>
    </PageBody>
  );
}
