import { and, eq, inArray } from 'drizzle-orm';
import type { Conn } from '@/db/client';
import { heldBookings, sessionsBetween, visitsOfSessions } from '@/db/queries/calendar';
import { absences, hoursOfLab, people, rigs } from '@/db/queries/people';
import { run } from '@/db/schema';
import type { MoveLab } from '@/lib/planner/lay-out/move-types';
import type { Member } from '../member';

const AROUND_MS = 40 * 86_400_000;
const LIVE = ['planned', 'started', 'done'];

type Held = Awaited<ReturnType<typeof heldBookings>>;

/** Runs of one preparation follow each other: each must end before the next begins. */
async function chainGaps(conn: Conn, labId: string, held: Held): Promise<MoveLab['gaps']> {
  const runIds = held.map((b) => b.runId);
  if (runIds.length === 0) return [];
  const rows = await conn
    .select({ id: run.id, preparationId: run.preparationId, plannedStart: run.plannedStart })
    .from(run)
    .where(and(eq(run.labId, labId), inArray(run.id, runIds)));
  const bookingOf = new Map(held.map((b) => [b.runId, b.id]));
  const chains = new Map<string, typeof rows>();
  for (const r of rows) chains.set(r.preparationId, [...(chains.get(r.preparationId) ?? []), r]);
  return [...chains.values()].flatMap((chain) => {
    const sorted = chain.sort(
      (a, b) => (a.plannedStart?.getTime() ?? 0) - (b.plannedStart?.getTime() ?? 0),
    );
    return sorted.slice(1).map((r, i) => ({
      before: bookingOf.get(sorted[i]!.id)!,
      after: bookingOf.get(r.id)!,
      gapMin: 0,
    }));
  });
}

type Moment = { atMinutes: number };
/** How long after a session's first visit another of its visits comes, ms. */
const after = (all: Moment[], one: Moment) =>
  (one.atMinutes - Math.min(...all.map((v) => v.atMinutes))) * 60_000;

/** The lab's calendar around some moments, as the engine asks for it when something moves. */
export async function moveLab(
  conn: Conn,
  of: { member: Member; around: Date[] },
): Promise<MoveLab> {
  const labId = of.member.labId;
  const moments = of.around.map((d) => d.getTime());
  const from = new Date(Math.min(...moments) - AROUND_MS);
  const to = new Date(Math.max(...moments) + AROUND_MS);
  const [sessions, held, staff, hours, away, rigRows] = await Promise.all([
    sessionsBetween(conn, { labId, from, to }),
    heldBookings(conn, { labId, from }),
    people(conn, { labId }),
    hoursOfLab(conn, { labId }),
    absences(conn, { labId, since: from }),
    rigs(conn, { labId }),
  ]);
  const live = sessions.filter((s) => LIVE.includes(s.state));
  const visits = await visitsOfSessions(conn, { labId, sessionIds: live.map((s) => s.id) });
  const span = (a: { from: Date; to: Date }) => ({
    from: a.from.toISOString(),
    to: a.to.toISOString(),
  });
  const hoursOf = (match: (h: (typeof hours)[number]) => boolean) =>
    hours.filter(match).map(({ rrule, from: f, to: t }) => ({ rrule, from: f, to: t }));
  return {
    timeZone: of.member.lab.timeZone,
    sessions: live.map((s) => {
      const own = visits.filter((v) => v.sessionId === s.id).map((v) => v.visit);
      const rig = rigRows.find((r) => r.id === s.rigId);
      return {
        id: s.id,
        title: `run ${s.runNumber} of ${s.study}`,
        booking: s.bookingId,
        rig: s.rigId,
        people: [s.personId],
        from: s.startsAt.toISOString(),
        to: s.endsAt.toISOString(),
        skills: rig?.skills ?? [],
        ...(own.length > 0
          ? {
              earliest: new Date(
                Math.max(...own.map((v) => v.earliest.getTime() - after(own, v))),
              ).toISOString(),
              latest: new Date(
                Math.min(...own.map((v) => v.latest.getTime() - after(own, v))),
              ).toISOString(),
            }
          : {}),
      };
    }),
    occupations: held.map((b) => ({ booking: b.id, rig: b.rigId, ...span(b) })),
    gaps: await chainGaps(conn, labId, held),
    people: staff.map((p) => ({
      id: p.userId,
      name: p.name,
      skills: p.skills,
      hours: hoursOf((h) => h.userId === p.userId),
      away: away.filter((a) => a.userId === p.userId).map(span),
      ...(p.maxMinutesPerDay ? { maxMinutesPerDay: p.maxMinutesPerDay } : {}),
      ...(p.minRestHours ? { minRestHours: p.minRestHours } : {}),
    })),
    rigs: rigRows.map((r) => {
      const open = hoursOf((h) => h.rigId === r.id);
      return { id: r.id, name: r.name, capacity: r.capacity, ...(open.length ? { open } : {}) };
    }),
    closed: away.filter((a) => a.userId === null).map(span),
  };
}
