import { v7 as uuid } from 'uuid';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { Db } from '@/db/client';
import { benchSession } from '@/db/queries/bench';
import {
  calendarStamp,
  heldBookings,
  sessionsBetween,
  visitsOfSessions,
} from '@/db/queries/calendar';
import { latestEstimate } from '@/db/queries/estimates';
import { absences, hoursOfLab, people, peopleOfRole, rigs } from '@/db/queries/people';
import { latestPrediction, predictionOutlines } from '@/db/queries/predictions';
import { runsWithReadings, verdictsOfRuns } from '@/db/queries/readings';
import { approvedVersion, levelsOf, seriesVersionById, seriesVersions } from '@/db/queries/series';
import { standingStops } from '@/db/queries/stops';
import { studyById } from '@/db/queries/studies';
import { levelMarks, observedOnsets } from '@/db/queries/study-ribbons';
import { latestSystem, systemById } from '@/db/queries/systems';
import { absence, onsetEstimate, runVerdict } from '@/db/schema';
import { memberOf } from '@/lib/server/member';
import { pressStop } from '@/lib/server/stops/press-stop';
import {
  acting,
  DAY,
  type FreshLab,
  freshLab,
  MONDAY,
  openTestDatabase,
  plus,
} from '../setup/fresh-lab';
import { laidOutStudy } from '../setup/fresh-study';

const { db, close } = openTestDatabase();
afterAll(close);

let ours: FreshLab;
let theirs: FreshLab;
let of: Awaited<ReturnType<typeof laidOutStudy>>;
let systemId: string;

beforeAll(async () => {
  ours = await freshLab(db);
  theirs = await freshLab(db);
  of = await laidOutStudy(db, ours);
  const { labId } = ours;
  systemId = (await latestSystem(db, { labId, studyId: of.studyId }))!.id;
  await pressStop(acting(db, ours.people.head), { studyId: of.studyId });
  const span = { from: MONDAY, to: plus(MONDAY, DAY), reason: 'closed' };
  await db.insert(absence).values({ id: uuid(), labId, userId: null, ...span });
  const verdict = { kind: 'published' as const, verdict: 'steady' as const, reason: 'seen' };
  await db.insert(runVerdict).values({ id: uuid(), labId, runId: of.rows[0]!.run.id, ...verdict });
  await db.insert(onsetEstimate).values({
    id: uuid(),
    labId,
    studyId: of.studyId,
    predictionId: of.predictionId,
    requests: [],
    answers: [],
    runsJudged: 0,
    engineVersion: 'x',
  });
});

const from = plus(MONDAY, -DAY);
const to = plus(MONDAY, 90 * DAY);
const ids = () => ({
  studyId: of.studyId,
  seriesVersionId: of.version.id,
  sessionId: of.rows[0]!.session.id,
  runIds: of.rows.map((r) => r.run.id),
  sessionIds: of.rows.map((r) => r.session.id),
});

/** Each query, asked about our study: by our lab it must find something, by another lab nothing. */
const queries: [string, (db: Db, labId: string) => Promise<unknown>][] = [
  ['the session at the bench', (d, labId) => benchSession(d, { labId, ...ids() })],
  ['sessions of the calendar', (d, labId) => sessionsBetween(d, { labId, from, to, ...ids() })],
  ['visits of sessions', (d, labId) => visitsOfSessions(d, { labId, ...ids() })],
  ['bookings', (d, labId) => heldBookings(d, { labId, from })],
  ['the estimate', (d, labId) => latestEstimate(d, { labId, ...ids() })],
  ['absences', (d, labId) => absences(d, { labId, since: from })],
  ['the prediction', (d, labId) => latestPrediction(d, { labId, ...ids() })],
  [
    'outlines of predictions',
    async (d, labId) => [...(await predictionOutlines(d, { labId, studyIds: [of.studyId] }))],
  ],
  ['verdicts', (d, labId) => verdictsOfRuns(d, { labId, ...ids() })],
  ['runs', (d, labId) => runsWithReadings(d, { labId, ...ids() })],
  ['the approved version', (d, labId) => approvedVersion(d, { labId, ...ids() })],
  ['versions', (d, labId) => seriesVersions(d, { labId, ...ids() })],
  ['a version', (d, labId) => seriesVersionById(d, { labId, ...ids() })],
  ['levels', (d, labId) => levelsOf(d, { labId, ...ids() })],
  ['stops', (d, labId) => standingStops(d, { labId, ...ids() })],
  ['the study', (d, labId) => studyById(d, { labId, ...ids() })],
  ['marks of levels', (d, labId) => levelMarks(d, { labId, studyIds: [of.studyId] })],
  ['the newest system', (d, labId) => latestSystem(d, { labId, ...ids() })],
  ['a system', (d, labId) => systemById(d, { labId, id: systemId })],
];
const nothing = (found: unknown) =>
  found === null || found === undefined || (Array.isArray(found) && found.length === 0);

describe('a query', () => {
  test.each(queries)(
    'for %s finds it for its own lab and nothing for another',
    async (_n, query) => {
      expect(nothing(await query(db, ours.labId))).toBe(false);
      expect(nothing(await query(db, theirs.labId))).toBe(true);
      expect(nothing(await query(db, uuid()))).toBe(true);
    },
  );

  test('for observed onsets gives another lab none', async () => {
    const wanted = { studyIds: [of.studyId] };
    const found = await observedOnsets(db, { labId: theirs.labId, ...wanted });
    expect(JSON.stringify([...(found as Iterable<unknown>)])).toBe('[]');
  });

  test('for people, rigs and hours gives each lab its own', async () => {
    const own = async (labId: string) => ({
      people: (await people(db, { labId })).map((p) => p.userId),
      heads: (await peopleOfRole(db, { labId, roles: ['head'] })).map((p) => p.userId),
      rigs: (await rigs(db, { labId })).map((r) => r.id),
      hours: (await hoursOfLab(db, { labId })).map((h) => h.labId),
    });
    for (const lab of [ours, theirs]) {
      const found = await own(lab.labId);
      const all = Object.values(lab.people).map((p) => p.userId);
      expect([...found.people].sort()).toEqual(all.sort());
      expect(found.heads).toEqual([lab.people.head.userId]);
      expect(found.rigs).toEqual([lab.rigId]);
      expect(new Set(found.hours)).toEqual(new Set([lab.labId]));
    }
  });

  test('for the calendar’s stamp is not moved by another lab’s sessions', async () => {
    expect(await calendarStamp(db, { labId: theirs.labId })).toBe('0:0');
  });

  /** Take no connection, or write what their caller made. */
  const others =
    /^(insert|update)|^(placeOnRibbon|stationsOf|waitingAt|reachedStation|standingVerdict)$/;
  const modules = import.meta.glob('../../db/queries/*.ts', { eager: true });
  const all = Object.values(modules)
    .flatMap((m) => Object.entries(m as Record<string, unknown>))
    .filter(([name, f]) => typeof f === 'function' && !others.test(name)) as [string, Query][];
  type Query = (conn: Db, of: Record<string, unknown>) => Promise<unknown>;
  /** Everything that any query asks for, so that one that is written tomorrow is asked as well. */
  const everything = (labId: string) => ({
    ...ids(),
    labId,
    from,
    to,
    since: from,
    now: plus(MONDAY, 200 * DAY),
    id: systemId,
    number: 1,
    studyIds: [of.studyId],
    runId: of.rows[0]!.run.id,
    rigId: ours.rigId,
    uploadId: uuid(),
    readout: 'x',
    count: 1,
    most: 100,
    limit: 100,
    kind: 'predict',
    role: 'head',
    roles: ['head'],
    userId: theirs.people.head.userId,
  });
  const words = (found: unknown) =>
    JSON.stringify(found, (_k, v) => (v instanceof Map || v instanceof Set ? [...v] : v)) ?? '';
  const secrets = () => [
    'Brusselator at rising feed',
    ours.labId,
    ours.rigId,
    of.version.id,
    of.predictionId,
    systemId,
    ...ids().runIds,
    ...ids().sessionIds,
    ...Object.values(ours.people).flatMap((p) => [p.userId, p.name]),
  ];

  test.each(all)('%s tells another lab nothing of this one', async (_name, query) => {
    const told = words(await query(db, everything(theirs.labId)));
    expect(secrets().filter((s) => told.includes(s))).toEqual([]);
  });

  test('of most kinds does tell its own lab, so that silence means something', async () => {
    const telling = [];
    for (const [name, query] of all) {
      const told = words(await query(db, everything(ours.labId)));
      if (secrets().some((s) => told.includes(s))) telling.push(name);
    }
    expect(telling.length).toBeGreaterThan(all.length / 2);
  });
});

describe('a session token', () => {
  test('stands for nobody once its version is over, or its person unknown', async () => {
    const { userId } = ours.people.head;
    expect(await memberOf(db, { userId, version: 1 })).toMatchObject({ labId: ours.labId });
    expect(await memberOf(db, { userId, version: 0 })).toBeNull();
    expect(await memberOf(db, { userId })).toBeNull();
    expect(await memberOf(db, { userId: uuid(), version: 1 })).toBeNull();
    expect(await memberOf(db, {})).toBeNull();
  });
});
