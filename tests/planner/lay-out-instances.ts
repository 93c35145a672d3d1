import type { z } from 'zod';
import { type LayOutRequest, layOutRequest } from '@/lib/contracts/lay-out';
import { type Random, seededRandom } from '@/lib/planner/lay-out/random';

type Input = z.input<typeof layOutRequest>;
export const request = (input: Input): LayOutRequest => layOutRequest.parse(input);

/** A weekday of eight hours, the plainest working hours. */
export const WEEKDAYS = { rrule: 'FREQ=WEEKLY;BYDAY=MO,TU,WE,TH,FR', from: '08:00', to: '17:00' };
export const DAILY = { rrule: 'FREQ=DAILY', from: '08:00', to: '17:00' };
export const ALWAYS = { rrule: 'FREQ=DAILY', from: '00:00', to: '00:00' };

const pick = <T>(r: Random, items: readonly T[]): T => items[Math.floor(r() * items.length)]!;
const whole = (r: Random, low: number, high: number) => low + Math.floor(r() * (high - low + 1));
const chance = (r: Random, p: number) => r() < p;

export type Place = { timeZone: string; notBefore: string; days: number };
/** Both zones, both clock changes of 2026 (and a plain week). */
export const PLACES: Place[] = [
  { timeZone: 'Europe/Berlin', notBefore: '2026-03-26T07:00:00+01:00', days: 6 },
  { timeZone: 'Europe/Berlin', notBefore: '2026-10-22T06:10:00+02:00', days: 6 },
  { timeZone: 'America/New_York', notBefore: '2026-03-05T22:00:00-05:00', days: 6 },
  { timeZone: 'America/New_York', notBefore: '2026-10-30T00:00:00-04:00', days: 6 },
  { timeZone: 'Europe/Berlin', notBefore: '2026-12-01T03:00:00Z', days: 5 },
];

const HOURS = [
  WEEKDAYS,
  DAILY,
  { rrule: 'FREQ=DAILY', from: '22:00', to: '06:00' },
  { rrule: 'FREQ=DAILY;INTERVAL=2', from: '01:30', to: '09:00' },
  { rrule: 'FREQ=WEEKLY;BYDAY=SA,SU,MO', from: '02:30', to: '12:15' },
  { rrule: 'FREQ=DAILY;COUNT=4', from: '06:00', to: '14:00' },
];

function span(r: Random, start: number, days: number, longest: number) {
  const from = start + whole(r, 0, days * 24 * 12) * 300_000;
  const to = from + whole(r, 1, longest) * 900_000;
  return { from: new Date(from).toISOString(), to: new Date(to).toISOString() };
}

function booking(r: Random, i: number, rigs: string[]) {
  const minutes = whole(r, 1, 40) * pick(r, [5, 15, 30, 7]);
  const visits = whole(r, 0, 3);
  const attended = Array.from({ length: visits }, (_, k) => ({
    at: k === 0 ? 0 : Math.round(minutes * r()),
    minutes: whole(r, 1, 9) * 5,
    late: chance(r, 0.4) ? whole(r, 0, 12) * 10 : 0,
    people: chance(r, 0.15) ? 2 : 1,
    ...(chance(r, 0.3) ? { round: pick(r, ['morning', 'evening']) } : {}),
  }));
  const gapMin = whole(r, 0, 6) * 30;
  return {
    id: `b${i}`,
    minutes,
    attended,
    rigs: rigs.filter(() => chance(r, 0.7)).concat(pick(r, rigs)),
    ...(i > 0 && chance(r, 0.3) ? { sameRigAs: `b${whole(r, 0, i - 1)}` } : {}),
    ...(chance(r, 0.3) ? { skills: [pick(r, ['flow', 'cells'])] } : {}),
    ...(i > 0 && chance(r, 0.4)
      ? {
          after: [
            {
              id: `b${whole(r, 0, i - 1)}`,
              gapMin,
              ...(chance(r, 0.5) ? { gapMax: gapMin + whole(r, 0, 20) * 15 } : {}),
            },
          ],
        }
      : {}),
    ...(chance(r, 0.3) ? { weight: whole(r, 0, 5) } : {}),
  };
}

/** A small lab with every rule of the contract in play, the same for the same seed. */
export function randomRequest(seed: number, place: Place, effort = 60): LayOutRequest {
  const r = seededRandom(seed);
  const start = Date.parse(place.notBefore);
  const rigs = Array.from({ length: whole(r, 1, 3) }, (_, i) => `rig${i}`);
  const people = Array.from({ length: whole(r, 1, 4) }, (_, i) => `p${i}`);
  return request({
    timeZone: place.timeZone,
    notBefore: place.notBefore,
    notAfter: new Date(start + place.days * 86_400_000).toISOString(),
    bookings: Array.from({ length: whole(r, 1, 12) }, (_, i) => booking(r, i, rigs)),
    rigs: rigs.map((id) => ({
      id,
      capacity: chance(r, 0.3) ? 2 : 1,
      ...(chance(r, 0.2) ? { open: [{ rrule: 'FREQ=DAILY', from: '05:00', to: '23:00' }] } : {}),
    })),
    people: people.map((id) => ({
      id,
      skills: ['flow', 'cells'].filter(() => chance(r, 0.6)),
      hours: chance(r, 0.2) ? [pick(r, HOURS), pick(r, HOURS)] : [pick(r, HOURS)],
      away: chance(r, 0.4) ? [span(r, start, place.days, 60)] : [],
      ...(chance(r, 0.4) ? { maxMinutesPerDay: whole(r, 2, 20) * 15 } : {}),
      ...(chance(r, 0.4) ? { minRestHours: whole(r, 1, 14) } : {}),
    })),
    closed: chance(r, 0.4) ? [span(r, start, place.days, 40)] : [],
    busy: chance(r, 0.6)
      ? [
          { rig: pick(r, rigs), ...span(r, start, place.days, 40) },
          { person: pick(r, people), ...span(r, start, place.days, 20) },
        ]
      : [],
    seed,
    effort,
  });
}
