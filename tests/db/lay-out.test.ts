import { and, eq, inArray } from 'drizzle-orm';
import { DateTime } from 'luxon';
import { afterAll, describe, expect, test } from 'vitest';
import {
  auditEvent,
  booking,
  outbox,
  preparation,
  run,
  seriesVersion,
  session,
  study,
} from '@/db/schema';
import { moveSession } from '@/lib/server/sessions/move-session';
import {
  acting,
  DAY,
  freshLab,
  HOUR,
  MINUTE,
  MONDAY,
  openTestDatabase,
  plus,
} from '../setup/fresh-lab';
import {
  approvedStudy,
  askedLayOut,
  calendarOf,
  laidOutStudy,
  newestVersion,
  workJob,
} from '../setup/fresh-study';

const { db, close } = openTestDatabase();
afterAll(close);

describe('a lay-out', () => {
  test('puts runs, rig, people, windows and reminders on the calendar, in order', async () => {
    const lab = await freshLab(db);
    const { studyId, rows, version } = await laidOutStudy(db, lab, { replicates: 2 });
    const runs = [...new Map(rows.map((r) => [r.run.id, r])).values()];
    expect(runs.map((r) => r.run.state)).toEqual(runs.map(() => 'planned'));
    const chains = new Map<string, typeof runs>();
    for (const r of runs) {
      chains.set(r.run.preparationId, [...(chains.get(r.run.preparationId) ?? []), r]);
    }
    expect(chains.size).toBe(2);
    for (const chain of chains.values()) {
      chain.sort((a, b) => +a.booking.from - +b.booking.from);
      chain.slice(1).forEach((r, i) => {
        expect(+r.booking.from).toBeGreaterThanOrEqual(+chain[i]!.booking.to);
        expect(r.run.dose).toBeGreaterThan(chain[i]!.run.dose);
        expect(r.run.dose - chain[i]!.run.dose).toBeLessThanOrEqual(0.5 + 1e-9);
        expect(r.run.dose).toBeLessThanOrEqual(2.8);
      });
    }
    const bench = [lab.people.technician.userId, lab.people.investigator.userId];
    for (const { session: s, visits } of rows) {
      expect(bench).toContain(s.personId);
      for (const v of visits) {
        expect(+s.startsAt).toBeGreaterThanOrEqual(+v.earliest);
        expect(+s.startsAt).toBeLessThanOrEqual(+v.latest);
      }
    }
    const reminders = await db
      .select()
      .from(outbox)
      .where(and(eq(outbox.labId, lab.labId), eq(outbox.kind, 'reminder')));
    const late = rows.filter((r) => +r.session.startsAt > +plus(MONDAY, 24 * HOUR));
    for (const { session: s } of late) {
      const due = reminders.filter((m) => m.sessionId === s.id).map((m) => +m.dueAt - +s.startsAt);
      expect(due.sort((a, b) => a - b)).toEqual([-24 * HOUR, -HOUR]);
    }
    const told = await db
      .select()
      .from(outbox)
      .where(and(eq(outbox.labId, lab.labId), eq(outbox.kind, 'assigned')));
    expect(new Set(told.map((t) => t.recipientId))).toEqual(
      new Set(rows.map((r) => r.session.personId)),
    );
    const [stored] = await db.select().from(seriesVersion).where(eq(seriesVersion.id, version.id));
    expect(stored).toMatchObject({ laidOutAt: MONDAY, unplaced: [] });
    const trail = await db.select().from(auditEvent).where(eq(auditEvent.studyId, studyId));
    expect(trail.map((t) => t.event)).toContain('sessions.laid-out');
  });

  test('is not stored when the calendar was changed meanwhile', async () => {
    const lab = await freshLab(db);
    const first = await laidOutStudy(db, lab);
    const second = await approvedStudy(db, lab);
    const { jobId } = await askedLayOut(db, lab, second.studyId);
    const last = first.rows.at(-1)!;
    await moveSession(acting(db, lab.people.investigator), {
      sessionId: last.session.id,
      revision: last.session.revision,
      startsAt: plus(last.visits[0]!.earliest, 10 * MINUTE).toISOString(),
    });
    await expect(workJob(db, jobId)).rejects.toThrow(/calendar was changed/);
    expect(await calendarOf(db, second.studyId)).toEqual([]);
    expect(await db.$count(run, eq(run.studyId, second.studyId))).toBe(0);
    expect(await db.$count(preparation, eq(preparation.studyId, second.studyId))).toBe(0);
    // Asked again it is placed beside the first.
    const again = await askedLayOut(db, lab, second.studyId);
    await workJob(db, again.jobId);
    expect(await calendarOf(db, second.studyId)).not.toEqual([]);
  });

  test('is not stored when the series was changed meanwhile', async () => {
    const lab = await freshLab(db);
    const about = await approvedStudy(db, lab);
    const { jobId } = await askedLayOut(db, lab, about.studyId);
    await db
      .update(seriesVersion)
      .set({ revision: about.version.revision + 1 })
      .where(eq(seriesVersion.id, about.version.id));
    await expect(workJob(db, jobId)).rejects.toThrow(/series was changed/);
    expect(await calendarOf(db, about.studyId)).toEqual([]);
  });

  test('made anew takes the unstarted runs off and leaves what has begun', async () => {
    const lab = await freshLab(db);
    const { studyId, rows } = await laidOutStudy(db, lab);
    const begun = rows[0]!.run.id;
    await db.update(run).set({ state: 'settling', setAt: MONDAY }).where(eq(run.id, begun));
    const { jobId } = await askedLayOut(db, lab, studyId, plus(MONDAY, DAY));
    await workJob(db, jobId, plus(MONDAY, DAY));
    const runs = await db.select().from(run).where(eq(run.studyId, studyId));
    const old = new Set(rows.map((r) => r.run.id));
    for (const r of runs) {
      const expected = r.id === begun ? 'settling' : old.has(r.id) ? 'cancelled' : 'planned';
      expect(r.state).toBe(expected);
    }
    expect(new Set(runs.map((r) => r.number)).size).toBe(runs.length);
    const planned = runs.filter((r) => r.state === 'planned').map((r) => r.levelId);
    expect(planned).not.toContain(rows[0]!.run.levelId);
    const gone = rows.filter((r) => r.run.id !== begun).map((r) => r.session.id);
    const cancelled = await db.select().from(session).where(inArray(session.id, gone));
    expect(new Set(cancelled.map((s) => s.state))).toEqual(new Set(['cancelled']));
    const live = await db
      .select()
      .from(outbox)
      .where(
        and(
          inArray(outbox.sessionId, gone),
          eq(outbox.kind, 'reminder'),
          eq(outbox.state, 'waiting'),
        ),
      );
    expect(live).toEqual([]);
    const held = await db.select().from(booking).where(eq(booking.labId, lab.labId));
    const ids = new Set(held.filter((b) => b.state === 'held').map((b) => b.runId));
    expect(ids).toEqual(
      new Set([begun, ...runs.flatMap((r) => (r.state === 'planned' ? [r.id] : []))]),
    );
  });

  test('of a version that is not approved, or whose approval has run out, is refused', async () => {
    const lab = await freshLab(db);
    const about = await approvedStudy(db, lab);
    const ask = () => askedLayOut(db, lab, about.studyId);
    for (const state of ['draft', 'submitted', 'superseded'] as const) {
      await db.update(seriesVersion).set({ state }).where(eq(seriesVersion.id, about.version.id));
      await expect(ask()).rejects.toThrow(new RegExp(`is ${state}, not approved`));
    }
    await db
      .update(seriesVersion)
      .set({ state: 'approved' })
      .where(eq(seriesVersion.id, about.version.id));
    const animal = { perturbs: 'animal' as const, approvalReference: 'A1' };
    const past = { ...animal, approvalExpires: plus(MONDAY, -DAY) };
    await db.update(study).set(past).where(eq(study.id, about.studyId));
    await expect(ask()).rejects.toThrow(/expired/);
    // A ceiling that was lowered since is asked again.
    await db
      .update(study)
      .set({ perturbs: 'device', approvalExpires: null, ceilingDose: 1.2 })
      .where(eq(study.id, about.studyId));
    await expect(ask()).rejects.toThrow(/above the ceiling of 1.2/);
  });

  test('ends with the last day that was approved, though the study names a later one by now', async () => {
    const lab = await freshLab(db);
    const end = plus(MONDAY, 1.5 * HOUR * 4);
    const wanted = { approvalReference: 'EC 1', approvalExpires: end };
    const about = await approvedStudy(db, lab, { ...wanted, perturbs: 'human volunteer' });
    await db
      .update(study)
      .set({ approvalExpires: plus(MONDAY, 90 * DAY) })
      .where(eq(study.id, about.studyId));
    const { jobId } = await askedLayOut(db, lab, about.studyId);
    await workJob(db, jobId);
    const rows = await calendarOf(db, about.studyId);
    expect(rows.every((r) => r.session.endsAt <= end)).toBe(true);
    const { unplaced } = await newestVersion(db, lab, about.studyId);
    expect(unplaced?.length).toBeGreaterThan(0);
  });
});

test('across the night that the clocks change, minutes are elapsed minutes', async () => {
  // Europe/Berlin: at 02:00 on 2026-03-29 clocks go forward to 03:00 (01:00 UTC).
  const change = new Date('2026-03-29T01:00:00Z');
  const friday = new Date('2026-03-27T07:00:00Z');
  const lab = await freshLab(db, { timeZone: 'Europe/Berlin' });
  const caps = { timeUnit: 'h', settleCapMinutes: 18 * 60, recordCapMinutes: 36 * 60 };
  const { rows } = await laidOutStudy(db, lab, { ...caps, levels: 1 }, friday);
  const across = rows.filter((r) => r.booking.from < change && r.booking.to > change);
  expect(across.length).toBeGreaterThan(0);
  for (const { booking: b, run: r } of across) {
    const own = rows.filter((x) => x.run.id === r.id);
    const set = own.find((x) => x.visits[0]!.kind === 'set dose')!;
    const collect = own.find((x) => x.visits[0]!.kind === 'collect')!;
    const minutes = collect.visits[0]!.atMinutes;
    expect(+collect.visits[0]!.earliest - +set.session.startsAt).toBe(minutes * MINUTE);
    expect(+b.to - +b.from).toBeGreaterThanOrEqual(minutes * MINUTE);
    // On the wall the same stretch looks an hour longer.
    const wall = (d: Date) =>
      DateTime.fromJSDate(d, { zone: 'Europe/Berlin' }).toFormat('yyyy-MM-dd HH:mm');
    const naive = (a: Date, z: Date) =>
      +new Date(`${wall(z).replace(' ', 'T')}Z`) - +new Date(`${wall(a).replace(' ', 'T')}Z`);
    expect(naive(set.session.startsAt, collect.visits[0]!.earliest)).toBe((minutes + 60) * MINUTE);
  }
});
