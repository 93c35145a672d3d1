import { and, eq, inArray, notInArray } from 'drizzle-orm';
import type { Conn } from '@/db/client';
import { calendarStamp, heldBookings, sessionsBetween } from '@/db/queries/calendar';
import { absences, hoursOfLab, people } from '@/db/queries/people';
import { preparation, rig, run } from '@/db/schema';
import type { LayOutRequest } from '@/lib/contracts';
import { AppError } from '../errors';
import type { Member } from '../member';
import type { Level, SeriesVersion, Study } from '../series/types';
import type { LayOutPlan } from './plan';
import { bookingsOf, runsToLay } from './runs';

const MOST_RUNS = 400;
const UNSTARTED = ['planned', 'tentative', 'cancelled'] as const;

type Ask = {
  member: Member;
  study: Study;
  version: SeriesVersion;
  levels: Level[];
  notBefore: Date;
  notAfter: Date;
};

/** The study's rig, or what to do when there is none. */
async function rigOf(conn: Conn, study: Study) {
  const [found] = study.rigId
    ? await conn
        .select()
        .from(rig)
        .where(and(eq(rig.id, study.rigId), eq(rig.labId, study.labId), eq(rig.retired, false)))
    : [];
  if (!found) {
    throw new AppError('not-possible', 'This study has no rig to work on.', {
      mend: 'Choose one on the System page; the head adds rigs under Lab.',
    });
  }
  return found;
}

/** Who may attend: everybody at the bench who has working hours, less what they have on already. */
async function staffing(conn: Conn, ask: Ask): Promise<Pick<LayOutRequest, 'people' | 'closed'>> {
  const labId = ask.member.labId;
  const [all, hours, away] = await Promise.all([
    people(conn, { labId }),
    hoursOfLab(conn, { labId }),
    absences(conn, { labId, since: ask.notBefore }),
  ]);
  const span = (a: { from: Date; to: Date }) => ({
    from: a.from.toISOString(),
    to: a.to.toISOString(),
  });
  return {
    closed: away.filter((a) => a.userId === null).map(span),
    people: all
      .filter((p) => p.role !== 'observer' && hours.some((h) => h.userId === p.userId))
      .map((p) => ({
        id: p.userId,
        skills: p.skills,
        hours: hours
          .filter((h) => h.userId === p.userId)
          .map(({ rrule, from, to }) => ({ rrule, from, to })),
        away: away.filter((a) => a.userId === p.userId).map(span),
        ...(p.maxMinutesPerDay ? { maxMinutesPerDay: p.maxMinutesPerDay } : {}),
        ...(p.minRestHours ? { minRestHours: p.minRestHours } : {}),
      })),
  };
}

/**
 * What the rig and the people that are asked for have on already; the engine knows no others. This
 * study's own unstarted runs are laid anew and do not count.
 */
async function busyTimes(
  conn: Conn,
  ask: Ask,
  wanted: { rigId: string; people: { id: string }[] },
): Promise<LayOutRequest['busy']> {
  const labId = ask.member.labId;
  const [held, sessions] = await Promise.all([
    heldBookings(conn, { labId, from: ask.notBefore }),
    sessionsBetween(conn, { labId, from: ask.notBefore, to: ask.notAfter }),
  ]);
  const replaced = new Set(
    held
      .filter(
        (b) =>
          b.studyId === ask.study.id && (b.runState === 'planned' || b.runState === 'tentative'),
      )
      .map((b) => b.id),
  );
  return [
    ...held
      .filter((b) => b.rigId === wanted.rigId && !replaced.has(b.id))
      .map((b) => ({ rig: b.rigId, from: b.from.toISOString(), to: b.to.toISOString() })),
    ...sessions
      .filter((s) => wanted.people.some((p) => p.id === s.personId))
      .filter((s) => !replaced.has(s.bookingId) && ['planned', 'started'].includes(s.state))
      .map((s) => ({
        person: s.personId,
        from: s.startsAt.toISOString(),
        to: s.endsAt.toISOString(),
      })),
  ];
}

const GRID_MS = 5 * 60_000;

/**
 * A climb goes on with its living preparations, so its next run waits for the one that is under way,
 * also on a rig that could hold both.
 */
async function afterRunning(conn: Conn, ask: Ask): Promise<Date> {
  if (ask.version.scheme !== 'climb') return ask.notBefore;
  const held = await heldBookings(conn, { labId: ask.member.labId, from: ask.notBefore });
  const ends = held
    .filter((b) => b.studyId === ask.study.id && !['planned', 'tentative'].includes(b.runState))
    .map((b) => Math.ceil(b.to.getTime() / GRID_MS) * GRID_MS);
  return new Date(Math.max(ask.notBefore.getTime(), ...ends));
}

/** Everything that the lay-out job needs, read in one go. */
export async function buildLayOutPlan(conn: Conn, ask: Ask): Promise<LayOutPlan> {
  const { member, study, version, levels } = ask;
  const studyRig = await rigOf(conn, study);
  const preparations = await conn
    .select()
    .from(preparation)
    .where(and(eq(preparation.labId, member.labId), eq(preparation.studyId, study.id)))
    .orderBy(preparation.createdAt, preparation.code);
  const started = await conn
    .select({ levelId: run.levelId, preparationId: run.preparationId })
    .from(run)
    .where(
      and(
        eq(run.labId, member.labId),
        inArray(
          run.levelId,
          levels.map((l) => l.id),
        ),
        notInArray(run.state, [...UNSTARTED]),
      ),
    );
  const runs = runsToLay({
    series: version,
    levels,
    recordsItself: studyRig.recordsItself,
    live: preparations.filter((p) => p.endedAt === null).map((p) => ({ id: p.id, code: p.code })),
    codesUsed: preparations.length,
    started,
  });
  if (runs.length === 0) {
    throw new AppError(
      'not-possible',
      'Every run of this version has begun; nothing is left to lay out.',
    );
  }
  if (runs.length > MOST_RUNS) {
    throw new AppError(
      'not-possible',
      `${runs.length} runs are more than the ${MOST_RUNS} that one lay-out can hold.`,
      {
        mend: 'Take fewer levels or replicates.',
      },
    );
  }
  const staff = await staffing(conn, ask);
  if (staff.people.length === 0) {
    throw new AppError('not-possible', 'Nobody in this lab has working hours yet.', {
      mend: 'The head enters them under Lab, Hours.',
    });
  }
  const hours = await hoursOfLab(conn, { labId: member.labId });
  const open = hours
    .filter((h) => h.rigId === studyRig.id)
    .map(({ rrule, from, to }) => ({ rrule, from, to }));
  return {
    studyId: study.id,
    seriesVersionId: version.id,
    seriesRevision: version.revision,
    calendarStamp: await calendarStamp(conn, { labId: member.labId }),
    runs,
    request: {
      timeZone: member.lab.timeZone,
      notBefore: (await afterRunning(conn, ask)).toISOString(),
      notAfter: ask.notAfter.toISOString(),
      bookings: bookingsOf(runs, {
        scheme: version.scheme,
        order: version.order,
        rigId: studyRig.id,
        skills: studyRig.skills,
      }),
      rigs: [
        {
          id: studyRig.id,
          capacity: studyRig.capacity,
          ...(open.length > 0 ? { open } : {}),
        },
      ],
      ...staff,
      busy: await busyTimes(conn, ask, { rigId: studyRig.id, people: staff.people }),
      seed: 1,
      effort: 400,
    },
  };
}
