import type { IANAZone } from 'luxon';
import { EngineError } from '../../contracts/common';
import type { LayOutRequest } from '../../contracts/lay-out';
import { checkReferences, topologicalOrder } from './graph';
import { expandHours } from './hours';
import { PersonBook } from './person-book';
import { RigBook } from './rig-book';
import { type Span, subtractSpans } from './spans';
import { DAY, HOUR, LocalDays, minutesToMs, parseInstant, parseZone } from './time';

export type Visit = {
  /** Place in the request's `attended`. */
  index: number;
  at: number;
  duration: number;
  late: number;
  people: number;
  round: string | null;
};

/** One booking in whole milliseconds and in indices. */
export type Job = {
  index: number;
  id: string;
  duration: number;
  /** The longest that the rig can be held, all attendances as late as allowed. */
  longest: number;
  visits: Visit[];
  rigs: number[];
  /** People who hold every skill asked for. */
  able: number[];
  skills: string[];
  after: { job: number; gapMin: number; gapMax: number }[];
  followers: number[];
  /** The booking named by `sameRigAs`. */
  twin: number | null;
  /** All bookings that must stand on the same rig, this one included; [index] when alone. */
  group: number[];
  weight: number;
};

export type Problem = {
  zone: IANAZone;
  notBefore: number;
  notAfter: number;
  jobs: Job[];
  order: number[];
  rigs: RigBook[];
  people: PersonBook[];
};

const LONGEST_HORIZON = 3660 * DAY;
/** Busy stretches this long before or after the plan can still touch rest and daily maximum. */
const MARGIN = 10 * DAY;

function readSpans(spans: readonly { from: string; to: string }[] | undefined, at: string): Span[] {
  return (spans ?? []).map((s, i) => {
    const from = parseInstant(s.from, `${at}.${i}.from`);
    const to = parseInstant(s.to, `${at}.${i}.to`);
    if (to < from) {
      throw new EngineError(
        'invalid-request',
        'This stretch ends before it begins.',
        `${at}.${i}.to`,
      );
    }
    return { from, to };
  });
}

function readJobs(request: LayOutRequest): Job[] {
  const rigIndex = new Map(request.rigs.map((r, i) => [r.id, i]));
  const jobIndex = new Map(request.bookings.map((b, i) => [b.id, i]));
  return request.bookings.map((b, index) => {
    const duration = Math.max(1, minutesToMs(b.minutes));
    const visits = b.attended.map((a, i) => ({
      index: i,
      at: minutesToMs(a.at),
      duration: Math.max(1, minutesToMs(a.minutes)),
      late: minutesToMs(a.late),
      people: a.people,
      round: a.round ?? null,
    }));
    // Visits with no leeway come first: the others can make room for them.
    visits.sort((a, b2) => a.late - b2.late || a.at - b2.at || a.index - b2.index);
    const skills = [...new Set(b.skills ?? [])];
    const able = request.people.flatMap((p, i) =>
      skills.every((s) => p.skills?.includes(s)) ? [i] : [],
    );
    return {
      index,
      id: b.id,
      duration,
      longest: Math.max(duration, ...visits.map((v) => v.at + v.late + v.duration)),
      visits,
      rigs: [...new Set(b.rigs)].map((id) => rigIndex.get(id)!),
      able,
      skills,
      after: (b.after ?? []).map((a) => ({
        job: jobIndex.get(a.id)!,
        gapMin: minutesToMs(a.gapMin),
        gapMax: a.gapMax === undefined ? Number.POSITIVE_INFINITY : minutesToMs(a.gapMax),
      })),
      followers: [],
      twin: b.sameRigAs === undefined ? null : jobIndex.get(b.sameRigAs)!,
      group: [index],
      weight: b.weight ?? 1,
    };
  });
}

/** Joins bookings tied by `sameRigAs`, directly or through others that may be placed. */
export function joinGroups(jobs: readonly Job[], without: ReadonlySet<number>): void {
  for (const job of jobs) job.group = [job.index];
  for (const one of jobs) {
    if (one.twin === null || without.has(one.index) || without.has(one.twin)) continue;
    const other = jobs[one.twin]!;
    if (other.group === one.group) continue;
    const joined = [...one.group, ...other.group].sort((a, c) => a - c);
    for (const member of joined) jobs[member]!.group = joined;
  }
}

function readPeople(
  request: LayOutRequest,
  zone: IANAZone,
  days: LocalDays,
  from: number,
  to: number,
): PersonBook[] {
  const closed = readSpans(request.closed, 'closed');
  const busy = readSpans(request.busy, 'busy');
  return request.people.map((p, i) => {
    const hours = expandHours(p.hours, zone, from, to, `people.${i}.hours`);
    const elsewhere = busy.filter((s, k) => request.busy?.[k]?.person === p.id && s.to > s.from);
    const away = readSpans(p.away, `people.${i}.away`);
    const book = new PersonBook(
      p.id,
      new Set(p.skills ?? []),
      subtractSpans(hours, [...away, ...closed, ...elsewhere, { from: 0, to: from }]),
      days,
      p.maxMinutesPerDay === undefined ? Number.POSITIVE_INFINITY : minutesToMs(p.maxMinutesPerDay),
      Math.round((p.minRestHours ?? 0) * HOUR),
    );
    for (const s of elsewhere) {
      if (s.to > from - MARGIN && s.from < to + MARGIN) book.add(s.from, s.to, null, true);
    }
    return book;
  });
}

function readRigs(request: LayOutRequest, zone: IANAZone, from: number, to: number): RigBook[] {
  const busy = readSpans(request.busy, 'busy');
  return request.rigs.map((r, i) => {
    const open = r.open ? expandHours(r.open, zone, from, to, `rigs.${i}.open`) : null;
    const book = new RigBook(r.id, r.capacity, open);
    busy.forEach((s, k) => {
      if (request.busy?.[k]?.rig === r.id) book.change(s.from, s.to, 1);
    });
    return book;
  });
}

/** Checks a request beyond its shape and turns it into indices and milliseconds. */
export function readProblem(request: LayOutRequest): Problem {
  const zone = parseZone(request.timeZone);
  const notBefore = parseInstant(request.notBefore, 'notBefore');
  const notAfter = parseInstant(request.notAfter, 'notAfter');
  if (notAfter <= notBefore) {
    throw new EngineError('invalid-request', 'notAfter must lie after notBefore.', 'notAfter');
  }
  if (notAfter - notBefore > LONGEST_HORIZON) {
    throw new EngineError('limit-exceeded', 'A plan spans ten years at most.', 'notAfter');
  }
  checkReferences(request);
  const jobs = readJobs(request);
  for (const job of jobs) for (const a of job.after) jobs[a.job]!.followers.push(job.index);
  const order = topologicalOrder(jobs);
  joinGroups(jobs, new Set());
  const days = new LocalDays(notBefore - MARGIN, notAfter + MARGIN, zone);
  return {
    zone,
    notBefore,
    notAfter,
    jobs,
    order,
    rigs: readRigs(request, zone, notBefore, notAfter),
    people: readPeople(request, zone, days, notBefore, notAfter),
  };
}
