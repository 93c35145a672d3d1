import { describe, expect, it } from 'vitest';
import type { LayOutRequest } from '@/lib/contracts/lay-out';
import { checkLayOut } from '@/lib/planner/lay-out/check';
import { layOut } from '@/lib/planner/lay-out/lay-out';
import { type Random, seededRandom } from '@/lib/planner/lay-out/random';
import { request } from './lay-out-instances';

const START = Date.parse('2026-12-01T08:00:00+01:00');
/** The horizon in steps of 5 minutes. */
const STEPS = 30;

const whole = (r: Random, low: number, high: number) => low + Math.floor(r() * (high - low + 1));

/** Tiny: at most four bookings of one or two visits, two rigs, two people with one gap each. */
function tiny(seed: number): LayOutRequest {
  const r = seededRandom(seed);
  const iso = (step: number) => new Date(START + step * 300_000).toISOString();
  const bookings = Array.from({ length: whole(r, 2, 4) }, (_, i) => {
    const steps = whole(r, 1, 8);
    const gapMin = whole(r, 0, 2) * 5;
    return {
      id: `b${i}`,
      minutes: steps * 5,
      attended: Array.from({ length: whole(r, 0, 2) }, (_, k) => ({
        at: k * whole(r, 1, steps) * 5,
        minutes: whole(r, 1, 3) * 5,
        late: r() < 0.3 ? whole(r, 1, 3) * 5 : 0,
        people: r() < 0.2 ? 2 : 1,
        ...(r() < 0.4 ? { round: 'one' } : {}),
      })),
      rigs: r() < 0.5 ? ['r0'] : ['r0', 'r1'],
      ...(r() < 0.4 ? { skills: ['flow'] } : {}),
      weight: whole(r, 1, 4),
      ...(i > 0 && r() < 0.5
        ? {
            after: [
              {
                id: `b${whole(r, 0, i - 1)}`,
                gapMin,
                ...(r() < 0.6 ? { gapMax: gapMin + whole(r, 0, 3) * 5 } : {}),
              },
            ],
          }
        : {}),
      ...(i > 0 && r() < 0.3 ? { sameRigAs: `b${whole(r, 0, i - 1)}` } : {}),
    };
  });
  return request({
    timeZone: 'Europe/Berlin',
    notBefore: iso(0),
    notAfter: iso(STEPS),
    bookings,
    rigs: [{ id: 'r0' }, { id: 'r1' }],
    people: ['p0', 'p1'].map((id, i) => {
      const off = whole(r, 0, STEPS - 4);
      return {
        id,
        skills: i === 0 || r() < 0.5 ? ['flow'] : [],
        hours: [{ rrule: 'FREQ=DAILY', from: '08:00', to: '17:00' }],
        away: [{ from: iso(off), to: iso(off + whole(r, 1, 4)) }],
      };
    }),
    seed,
    effort: 1500,
  });
}

type Spot = { start: number; end: number; rig: string };
type Slot = { person: string; from: number; to: number; round?: string };

/** Every start, rig and choice of people, in steps: the true optimum of the cost. */
function bestByEnumeration(asked: LayOutRequest): [number, number, number] {
  const step = (iso: string) => (Date.parse(iso) - START) / 300_000;
  let best: [number, number, number] = [asked.bookings.length + 1, 0, 0];
  const spots = new Map<string, Spot>();
  const slots: Slot[] = [];

  const staff = (
    index: number,
    start: number,
    visits: number,
    end: number,
    then: (end: number) => void,
  ): void => {
    const booking = asked.bookings[index]!;
    const visit = booking.attended[visits];
    if (!visit) {
      then(end);
      return;
    }
    for (let late = 0; late <= visit.late / 5; late++) {
      const from = start + visit.at / 5 + late;
      const to = from + visit.minutes / 5;
      if (to > STEPS) return;
      const free = asked.people.filter(
        (p) =>
          (booking.skills ?? []).every((s) => p.skills?.includes(s)) &&
          (p.away ?? []).every((a) => step(a.to) <= from || step(a.from) >= to) &&
          slots.every(
            (s) =>
              s.person !== p.id ||
              s.to <= from ||
              s.from >= to ||
              (s.round !== undefined && s.round === visit.round),
          ),
      );
      const teams =
        visit.people === 2 ? (free.length === 2 ? [free] : []) : free.map((person) => [person]);
      for (const team of teams) {
        for (const p of team) slots.push({ person: p.id, from, to, round: visit.round });
        staff(index, start, visits + 1, Math.max(end, to), then);
        slots.length -= team.length;
      }
    }
  };

  const place = (index: number, unplaced: number, weighted: number): void => {
    if (unplaced > best[0] || (unplaced === best[0] && weighted > best[1])) return;
    const booking = asked.bookings[index];
    if (!booking) {
      const loads = asked.people.map((p) =>
        slots.reduce((sum, s) => sum + (s.person === p.id ? 5 * (s.to - s.from) : 0), 0),
      );
      // Of two people: each lies half the difference from the mean.
      const variance = ((loads[0]! - loads[1]!) / 2) ** 2;
      const ahead = unplaced < best[0] || weighted < best[1] || variance < best[2];
      if (ahead) best = [unplaced, weighted, variance];
      return;
    }
    const before = (booking.after ?? []).map((a) => ({ ...a, spot: spots.get(a.id) }));
    const twin = booking.sameRigAs === undefined ? undefined : spots.get(booking.sameRigAs);
    for (let start = 0; start < STEPS && before.every((a) => a.spot); start++) {
      const earliest = start + booking.minutes / 5;
      if (earliest > STEPS) break;
      const gaps = before.every(({ spot, gapMin, gapMax }) => {
        const gap = (start - spot!.end) * 5;
        return gap >= gapMin && (gapMax === undefined || gap <= gapMax);
      });
      if (!gaps) continue;
      for (const rig of booking.rigs) {
        if (twin && twin.rig !== rig) continue;
        staff(index, start, 0, earliest, (end) => {
          const taken = [...spots.values()].some(
            (s) => s.rig === rig && s.start < end && start < s.end,
          );
          if (taken) return;
          spots.set(booking.id, { start, end, rig });
          place(index + 1, unplaced, weighted + (booking.weight ?? 1) * end * 5);
          spots.delete(booking.id);
        });
      }
    }
    place(index + 1, unplaced + 1, weighted);
  };
  place(0, 0, 0);
  return best;
}

describe('on instances small enough to enumerate', () => {
  it('the lay-out is the optimum: number placed, weighted minutes, variance of load', () => {
    const missed: unknown[] = [];
    const runs = 60;
    for (let seed = 1; seed <= runs; seed++) {
      const asked = tiny(seed);
      const answer = layOut(asked);
      expect({ seed, broken: checkLayOut(asked, answer) }).toEqual({ seed, broken: [] });
      const best = bestByEnumeration(asked);
      const same = best.every((part, i) => Math.abs(part - answer.cost[i]!) < 1e-6);
      if (!same) missed.push({ seed, best, cost: answer.cost });
    }
    expect(missed).toEqual([]);
  });
});
