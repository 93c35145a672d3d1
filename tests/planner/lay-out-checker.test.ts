import { describe, expect, it } from 'vitest';
import type { LayOutAnswer, LayOutRequest } from '@/lib/contracts/lay-out';
import { checkLayOut } from '@/lib/planner/lay-out/check';
import { DAILY, request } from './lay-out-instances';

/** A lab and a plan written by hand that keeps every rule; each case below breaks exactly one. */
const lab = (over: Partial<LayOutRequest> = {}): LayOutRequest => ({
  ...request({
    timeZone: 'Europe/Berlin',
    notBefore: '2026-12-01T08:00:00+01:00',
    notAfter: '2026-12-04T18:00:00+01:00',
    bookings: [
      {
        id: 'a',
        minutes: 120,
        attended: [
          { at: 0, minutes: 30, late: 15 },
          { at: 90, minutes: 10, people: 2 },
        ],
        rigs: ['r'],
        skills: ['flow'],
      },
      {
        id: 'b',
        minutes: 60,
        attended: [{ at: 0, minutes: 20 }],
        rigs: ['r', 's'],
        after: [{ id: 'a', gapMin: 60, gapMax: 2000 }],
        sameRigAs: 'a',
      },
    ],
    rigs: [{ id: 'r', open: [{ rrule: 'FREQ=DAILY', from: '07:00', to: '20:00' }] }, { id: 's' }],
    people: [
      { id: 'mira', skills: ['flow'], hours: [DAILY], maxMinutesPerDay: 60, minRestHours: 12 },
      { id: 'jo', skills: ['flow'], hours: [DAILY] },
    ],
  }),
  ...over,
});

const at = (day: number, clock: string) => `2026-12-0${day}T${clock}:00+01:00`;
const plan = (): LayOutAnswer => ({
  placements: [
    {
      booking: 'a',
      start: at(1, '09:00'),
      end: at(1, '11:00'),
      rig: 'r',
      attendance: [
        { person: 'mira', from: at(1, '09:10'), to: at(1, '09:40') },
        { person: 'mira', from: at(1, '10:30'), to: at(1, '10:40') },
        { person: 'jo', from: at(1, '10:30'), to: at(1, '10:40') },
      ],
    },
    {
      booking: 'b',
      start: at(1, '12:00'),
      end: at(1, '13:00'),
      rig: 'r',
      attendance: [{ person: 'jo', from: at(1, '12:00'), to: at(1, '12:20') }],
    },
  ],
  unplaced: [],
  finish: at(1, '13:00'),
  // a ends 180 min after 08:00, b 300; Mira attends 40 min, Jo 30: variance 25.
  cost: [0, 480, 25],
});

const broken = (change: (p: LayOutAnswer) => void, over: Partial<LayOutRequest> = {}) => {
  const answer = plan();
  change(answer);
  return checkLayOut(lab(over), answer).join('; ');
};

describe('the checker', () => {
  it('passes a plan that keeps every rule', () => expect(broken(() => {})).toBe(''));

  const [first, second] = [0, 1];
  it.each<[string, (p: LayOutAnswer) => void, string]>([
    [
      'a start off the grid',
      (p) => {
        p.placements[second]!.start = at(1, '12:02');
      },
      'off the grid',
    ],
    [
      'a rig not asked for',
      (p) => {
        p.placements[first]!.rig = 's';
      },
      'rig not asked for',
    ],
    [
      'a twin on another rig',
      (p) => {
        p.placements[second]!.rig = 's';
      },
      'not on the rig of a',
    ],
    [
      'a visit later than allowed',
      (p) => {
        p.placements[first]!.attendance[0] = {
          person: 'mira',
          from: at(1, '09:16'),
          to: at(1, '09:46'),
        };
      },
      'outside its window',
    ],
    [
      'a visit cut short',
      (p) => {
        p.placements[first]!.attendance[0]!.to = at(1, '09:35');
      },
      'wrong length',
    ],
    [
      'one person counted twice',
      (p) => {
        p.placements[first]!.attendance[2]!.person = 'mira';
      },
      'one person twice',
    ],
    [
      'a visit left out',
      (p) => {
        p.placements[first]!.attendance.pop();
      },
      '2 attendances instead of 3',
    ],
    [
      'somebody unknown',
      (p) => {
        p.placements[second]!.attendance[0]!.person = 'eve';
      },
      'nobody here',
    ],
    [
      'a wrong end',
      (p) => {
        p.placements[second]!.end = at(1, '13:05');
      },
      'wrong end',
    ],
    [
      'a wrong finish',
      (p) => {
        p.finish = at(1, '11:00');
      },
      'finish',
    ],
    [
      'a wrong cost',
      (p) => {
        p.cost[1] = 470;
      },
      'cost[1]',
    ],
    [
      'a booking forgotten',
      (p) => {
        p.placements.pop();
      },
      'b: neither placed',
    ],
    [
      'a successor of nothing',
      (p) => {
        p.placements.shift();
      },
      'though a is not',
    ],
    [
      'too short a gap',
      (p) => {
        p.placements[second]!.start = at(1, '11:55');
      },
      'too soon',
    ],
  ])('convicts %s', (_, change, text) => expect(broken(change)).toContain(text));

  it.each<[string, Partial<LayOutRequest>, string]>([
    [
      'absence',
      {
        people: [
          {
            id: 'mira',
            skills: ['flow'],
            hours: [DAILY],
            away: [{ from: at(1, '09:39'), to: at(1, '09:50') }],
          },
          lab().people[1]!,
        ],
      },
      'mira is not there',
    ],
    [
      'hours',
      { people: [{ ...lab().people[0]!, hours: [{ ...DAILY, from: '09:15' }] }, lab().people[1]!] },
      'mira is off duty',
    ],
    ['closure', { closed: [{ from: at(1, '12:10'), to: at(1, '18:00') }] }, 'jo is not there'],
    ['skill', { people: [{ ...lab().people[0]!, skills: [] }, lab().people[1]!] }, 'mira lacks'],
    [
      'daily maximum',
      { people: [{ ...lab().people[0]!, maxMinutesPerDay: 39 }, lab().people[1]!] },
      '40 minutes on one day',
    ],
    [
      'rest after a late evening elsewhere',
      {
        busy: [
          { person: 'mira', from: '2026-11-30T22:00:00+01:00', to: '2026-11-30T23:00:00+01:00' },
        ],
      },
      'rests only 610',
    ],
    [
      'busy person',
      { busy: [{ person: 'jo', from: at(1, '12:19'), to: at(1, '14:00') }] },
      'jo is not there',
    ],
    [
      'busy rig',
      { busy: [{ rig: 'r', from: at(1, '12:59'), to: at(1, '14:00') }] },
      'exceed its capacity',
    ],
    [
      'opening hours of the rig',
      {
        rigs: [
          { id: 'r', capacity: 1, open: [{ rrule: 'FREQ=DAILY', from: '09:05', to: '20:00' }] },
          { id: 's', capacity: 1 },
        ],
      },
      'while shut',
    ],
    ['end of the plan', { notAfter: at(1, '12:30') }, 'ends after notAfter'],
  ])('convicts a breach of %s', (_, over, text) => expect(broken(() => {}, over)).toContain(text));

  it('convicts two places at once, unless both are of one round', () => {
    const both = (round?: string): string => {
      const base = lab();
      const bookings = [0, 1].map((i) => ({
        id: `v${i}`,
        minutes: 30,
        attended: [{ at: 0, minutes: 30, late: 0, people: 1, round }],
        rigs: ['r', 's'],
      }));
      const placements = [0, 1].map((i) => ({
        booking: `v${i}`,
        start: at(1, '09:00'),
        end: at(1, '09:30'),
        rig: i === 0 ? 'r' : 's',
        attendance: [{ person: 'jo', from: at(1, '09:00'), to: at(1, '09:30') }],
      }));
      const answer = { placements, unplaced: [], finish: at(1, '09:30'), cost: [0, 180, 900] };
      return checkLayOut({ ...base, bookings }, answer).join('; ');
    };
    expect(both()).toContain('at once');
    expect(both('noon')).toBe('');
  });
});
