import { v7 as uuid } from 'uuid';
import type { BookingRequest } from '@/lib/contracts';
import { visitTimes } from '@/lib/planner/cadence/visit-times';
import type { Level, SeriesVersion } from '../series/types';
import type { PlannedVisit, RunPlan } from './plan';

const GRID_MINUTES = 5;
/** A, B … Z, AA, AB …: codes of preparations in order. */
export function preparationCode(index: number): string {
  const letter = String.fromCharCode(65 + (index % 26));
  return index < 26 ? letter : preparationCode(Math.floor(index / 26) - 1) + letter;
}

export type LivePreparation = { id: string; code: string };
/** A run that already took place, or is under way, or was lost: its place is not laid again. */
export type StartedRun = { levelId: string; preparationId: string };

function directionOf(levels: Level[], i: number): 'up' | 'down' | null {
  const before = levels[i - 1];
  const here = levels[i];
  if (!before || !here || before.dose === here.dose) return null;
  return here.dose > before.dose ? 'up' : 'down';
}

function passOf(levels: Level[], i: number): number {
  const top = levels.reduce((best, l, k) => (l.dose > (levels[best]?.dose ?? 0) ? k : best), 0);
  return i > top ? 2 : 1;
}

/** A run's visits and length, on the five-minute grid. */
function timing(level: Level, recordsItself: boolean): { minutes: number; visits: PlannedVisit[] } {
  const visits = visitTimes({
    settleMinutes: level.settleMinutes,
    recordMinutes: level.recordMinutes,
    intervalMinutes: level.intervalMinutes,
    recordsItself,
  });
  const total = level.settleMinutes + level.recordMinutes;
  return { minutes: Math.ceil(total / GRID_MINUTES) * GRID_MINUTES, visits };
}

/**
 * The runs of a series that are still to be laid out. A climb carries each preparation through all
 * rows; fresh and parallel series start a new preparation for each row and replicate.
 */
export function runsToLay(of: {
  series: Pick<SeriesVersion, 'scheme' | 'order' | 'replicates'>;
  levels: Level[];
  recordsItself: boolean;
  live: LivePreparation[];
  codesUsed: number;
  started: StartedRun[];
}): RunPlan[] {
  const climb = of.series.scheme === 'climb';
  let next = of.codesUsed;
  const fresh = () => ({ id: uuid(), code: preparationCode(next++), isNew: true });
  const carriers = climb
    ? Array.from({ length: of.series.replicates }, (_, r) => {
        const kept = of.live[r];
        return kept ? { ...kept, isNew: false } : fresh();
      })
    : [];
  const plans: RunPlan[] = [];
  for (let r = 0; r < of.series.replicates; r++) {
    of.levels.forEach((level, i) => {
      const carrier = carriers[r];
      const begun = of.started.filter((s) => s.levelId === level.id);
      const taken = carrier ? begun.some((s) => s.preparationId === carrier.id) : begun.length > r;
      if (taken) return;
      plans.push({
        bookingId: uuid(),
        levelId: level.id,
        position: level.position,
        preparation: carrier ?? fresh(),
        pass: of.series.order === 'both' ? passOf(of.levels, i) : 1,
        direction: climb ? directionOf(of.levels, i) : null,
        dose: level.dose,
        control: level.control,
        ...timing(level, of.recordsItself),
      });
    });
  }
  return plans;
}

/** Runs as the engine's bookings: order and shared rig follow from the scheme. */
export function bookingsOf(
  plans: RunPlan[],
  of: {
    scheme: SeriesVersion['scheme'];
    order: SeriesVersion['order'];
    rigId: string;
    skills: string[];
  },
): BookingRequest[] {
  const chains = new Map<string, RunPlan[]>();
  return plans.map((plan) => {
    const inOrder = of.scheme === 'climb' || (of.scheme === 'fresh' && of.order !== 'randomised');
    // In a fresh series the nth replicate of a row follows the nth of the row before.
    const rank = plans.filter((p) => p.position === plan.position).indexOf(plan);
    const key = of.scheme === 'climb' ? plan.preparation.id : `replicate ${rank}`;
    const chain = chains.get(key) ?? [];
    chains.set(key, [...chain, plan]);
    const before = inOrder ? chain.at(-1) : undefined;
    const first = of.scheme === 'climb' ? chain[0] : undefined;
    return {
      id: plan.bookingId,
      minutes: plan.minutes,
      rigs: [of.rigId],
      skills: of.skills,
      ...(first ? { sameRigAs: first.bookingId } : {}),
      ...(before ? { after: [{ id: before.bookingId, gapMin: 0 }] } : {}),
      attended: plan.visits.map((v) => ({
        at: Math.max(0, v.atMinutes - v.earlyMinutes),
        minutes: v.minutes,
        late: Math.min(v.atMinutes, v.earlyMinutes) + v.lateMinutes,
        people: 1,
      })),
    };
  });
}
