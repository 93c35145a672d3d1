import { describe, expect, it } from 'vitest';
import { checkLayOut } from '@/lib/planner/lay-out/check';
import { layOut } from '@/lib/planner/lay-out/lay-out';
import { request } from './lay-out-instances';

/** 30 climbs of ten runs with ten visits each, eight people in three shifts, two months. */
function large(rigs: number, effort: number) {
  const ids = Array.from({ length: rigs }, (_, r) => `r${r}`);
  const shift = (from: string, to: string) => [{ rrule: 'FREQ=DAILY', from, to }];
  return request({
    timeZone: 'Europe/Berlin',
    notBefore: '2026-10-01T08:00:00+02:00',
    notAfter: '2026-11-30T08:00:00+01:00',
    bookings: Array.from({ length: 300 }, (_, i) => ({
      id: `b${i}`,
      minutes: 2000,
      attended: Array.from({ length: 10 }, (_, k) => ({ at: k * 200, minutes: 10, late: 60 })),
      rigs: ids.filter((_, r) => (r + Math.floor(i / 10)) % 3 > 0),
      skills: i % 2 ? ['flow'] : [],
      ...(i % 10 > 0
        ? { after: [{ id: `b${i - 1}`, gapMin: 360, gapMax: 5760 }], sameRigAs: `b${i - 1}` }
        : {}),
    })),
    rigs: ids.map((id) => ({ id })),
    people: Array.from({ length: 8 }, (_, i) => ({
      id: `p${i}`,
      skills: i % 2 ? ['flow'] : [],
      hours:
        i < 4 ? shift('06:00', '14:00') : i < 6 ? shift('07:00', '22:00') : shift('20:00', '08:00'),
      maxMinutesPerDay: 400,
      minRestHours: i < 6 ? 8 : 0,
    })),
    effort,
  });
}

describe('three hundred bookings of ten visits over sixty days', () => {
  it('are all placed where rigs suffice, every rule kept', () => {
    const asked = large(10, 2000);
    const answer = layOut(asked);
    expect(answer.unplaced).toEqual([]);
    expect(checkLayOut(asked, answer)).toEqual([]);
  });
  it('are improved where rigs do not suffice', () => {
    const greedy = layOut(large(6, 0)).cost[0]!;
    const improved = layOut(large(6, 1000)).cost[0]!;
    expect(greedy).toBeGreaterThan(0);
    expect(improved).toBeLessThan(greedy);
  });
});
