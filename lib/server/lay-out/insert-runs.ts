import { v7 as uuid } from 'uuid';
import type { Transaction } from '@/db/client';
import { booking, preparation, run, session, sessionVisit, visit } from '@/db/schema';
import type { Placement } from '@/lib/contracts';
import { queueReminders } from '../outbox/enqueue';
import type { LayOutPlan, PlannedVisit, RunPlan } from './plan';

type Where = { labId: string; firstNumber: number; now: Date };
const plus = (at: Date, minutes: number) => new Date(at.getTime() + minutes * 60_000);

/** Where one stay is the whole run, the run ends with the readings, not with the setting of its dose. */
const endOfStay = (stay: PlannedVisit): PlannedVisit => ({
  kind: 'collect',
  label: 'Readings taken',
  atMinutes: stay.atMinutes + stay.minutes,
  minutes: 0,
  earlyMinutes: 0,
  lateMinutes: stay.minutes,
});

async function insertRun(
  tx: Transaction,
  where: Where,
  plan: LayOutPlan,
  planned: { run: RunPlan; number: number; placement: Placement },
): Promise<void> {
  const { placement, number } = planned;
  const { labId } = where;
  const start = new Date(placement.start);
  const runId = uuid();
  const bookingId = uuid();
  const { levelId, pass, dose, control, direction } = planned.run;
  await tx.insert(run).values({
    id: runId,
    labId,
    studyId: plan.studyId,
    seriesVersionId: plan.seriesVersionId,
    levelId,
    preparationId: planned.run.preparation.id,
    pass,
    number,
    dose,
    control,
    direction,
    plannedStart: start,
    plannedEnd: new Date(placement.end),
  });
  await tx.insert(booking).values({
    id: bookingId,
    labId,
    rigId: placement.rig,
    runId,
    from: start,
    to: new Date(placement.end),
  });
  for (const i of planned.run.visits.keys()) {
    await insertSession(tx, where, plan, { ...planned, runId, bookingId, visit: i });
  }
}

/** One attendance of a placed run: its session, its visits and its reminders. */
async function insertSession(
  tx: Transaction,
  where: Where,
  plan: LayOutPlan,
  of: { run: RunPlan; placement: Placement; runId: string; bookingId: string; visit: number },
): Promise<void> {
  const { placement, runId, bookingId } = of;
  const { labId } = where;
  const { visits } = of.run;
  const attendance = placement.attendance[of.visit];
  const v = visits[of.visit];
  if (!attendance || !v) return;
  const start = new Date(placement.start);
  const sessionId = uuid();
  const startsAt = new Date(attendance.from);
  await tx.insert(session).values({
    id: sessionId,
    labId,
    studyId: plan.studyId,
    bookingId,
    rigId: placement.rig,
    personId: attendance.person,
    startsAt,
    endsAt: new Date(attendance.to),
    createdAt: where.now,
  });
  const moments = visits.length === 1 ? [v, endOfStay(v)] : [v];
  for (const m of moments) {
    const visitId = uuid();
    await tx.insert(visit).values({
      id: visitId,
      labId,
      runId,
      kind: m.kind,
      label: m.label,
      atMinutes: m.atMinutes,
      minutes: m.minutes,
      earliest: plus(start, Math.max(0, m.atMinutes - m.earlyMinutes)),
      latest: plus(start, m.atMinutes + m.lateMinutes),
    });
    await tx.insert(sessionVisit).values({ id: uuid(), labId, sessionId, visitId });
  }
  await queueReminders(tx, {
    labId,
    studyId: plan.studyId,
    sessionId,
    personId: attendance.person,
    startsAt,
    sequence: 0,
    now: where.now,
  });
}

/** Makes runs, bookings, visits, sessions and reminders of what was placed. */
export async function insertRuns(
  tx: Transaction,
  where: Where,
  plan: LayOutPlan,
  placements: Placement[],
): Promise<Set<string>> {
  const people = new Set<string>();
  const placed = placements
    .map((placement) => ({
      placement,
      run: plan.runs.find((r) => r.bookingId === placement.booking),
    }))
    .filter((p): p is { placement: Placement; run: RunPlan } => p.run !== undefined)
    .sort((a, b) => (a.placement.start < b.placement.start ? -1 : 1));
  const made = new Set<string>();
  for (const { run: planned } of placed) {
    const { id, code, isNew } = planned.preparation;
    if (!isNew || made.has(id)) continue;
    made.add(id);
    await tx
      .insert(preparation)
      .values({ id, labId: where.labId, studyId: plan.studyId, code, createdAt: where.now });
  }
  for (const [i, p] of placed.entries()) {
    await insertRun(tx, where, plan, { ...p, number: where.firstNumber + i });
    for (const a of p.placement.attendance) people.add(a.person);
  }
  return people;
}
