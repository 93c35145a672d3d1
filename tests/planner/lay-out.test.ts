import { describe, expect, it } from 'vitest';
import { type Input, run, week } from './lay-out-helpers';
import { ALWAYS, DAILY } from './lay-out-instances';

const reason = (input: Input) =>
  run(input)
    .unplaced.map((u) => u.reason)
    .join(' | ');
const starts = (input: Input) =>
  Object.fromEntries(run(input).placements.map((p) => [p.booking, p.start]));
const setting = [{ at: 0, minutes: 10 }];

describe('one booking', () => {
  it('starts at once when all is free, on the grid from notBefore', () => {
    const answer = run(
      week({ bookings: [{ id: 'a', minutes: 60, attended: setting, rigs: ['rig'] }] }),
    );
    expect(answer).toEqual({
      placements: [
        {
          booking: 'a',
          start: '2026-12-01T08:00:00+01:00',
          end: '2026-12-01T09:00:00+01:00',
          rig: 'rig',
          attendance: [
            { person: 'mira', from: '2026-12-01T08:00:00+01:00', to: '2026-12-01T08:10:00+01:00' },
          ],
        },
      ],
      unplaced: [],
      finish: '2026-12-01T09:00:00+01:00',
      cost: [0, 60, 0],
    });
  });
  it('counts elapsed time across both clock changes', () => {
    // Set at 22:00, visited 6 h later: 05:00 summer time in spring, 03:00 winter time in autumn.
    const across = (timeZone: string, notBefore: string, notAfter: string) =>
      run({
        ...week({}),
        timeZone,
        notBefore,
        notAfter,
        people: [{ id: 'mira', hours: [ALWAYS] }],
        bookings: [
          {
            id: 'a',
            minutes: 400,
            attended: [...setting, { at: 360, minutes: 10 }],
            rigs: ['rig'],
          },
        ],
      }).placements[0]?.attendance[1]?.from;
    expect(across('Europe/Berlin', '2026-03-28T22:00:00+01:00', '2026-03-30T00:00:00Z')).toBe(
      '2026-03-29T05:00:00+02:00',
    );
    expect(across('Europe/Berlin', '2026-10-24T22:00:00+02:00', '2026-10-26T00:00:00Z')).toBe(
      '2026-10-25T03:00:00+01:00',
    );
    expect(across('America/New_York', '2026-03-07T22:00:00-05:00', '2026-03-09T00:00:00Z')).toBe(
      '2026-03-08T05:00:00-04:00',
    );
  });
  it('waits so that every visit falls in working hours', () => {
    // A visit 20 h in must fall between 08:00 and 17:00, so the start waits until 12:00.
    const got = starts(
      week({
        bookings: [
          {
            id: 'a',
            minutes: 1300,
            attended: [...setting, { at: 1200, minutes: 10 }],
            rigs: ['rig'],
          },
        ],
      }),
    );
    expect(got).toEqual({ a: '2026-12-01T12:00:00+01:00' });
  });
  it('uses lateness rather than wait, and holds the rig until the last attendance ends', () => {
    const answer = run(
      week({
        bookings: [
          {
            id: 'a',
            minutes: 1200,
            attended: [...setting, { at: 1200, minutes: 30, late: 240 }],
            rigs: ['rig'],
          },
          { id: 'b', minutes: 60, attended: [], rigs: ['rig'], after: [{ id: 'a', gapMin: 0 }] },
        ],
      }),
    );
    // 08:00 + 20 h is 04:00; four hours late is 08:00; it ends 08:30 and b follows.
    expect(answer.placements[0]).toMatchObject({
      start: '2026-12-01T08:00:00+01:00',
      end: '2026-12-02T08:30:00+01:00',
    });
    expect(answer.placements[1]?.start).toBe('2026-12-02T08:30:00+01:00');
  });
  it('spans a closure while nobody need be there, but no visit falls in one', () => {
    const closed = [{ from: '2026-12-02T00:00:00+01:00', to: '2026-12-03T00:00:00+01:00' }];
    const two = (at: number) => [...setting, { at, minutes: 10 }];
    const at = (hours: number) =>
      starts(
        week({
          closed,
          bookings: [{ id: 'a', minutes: 3000, attended: two(hours * 60), rigs: ['rig'] }],
        }),
      );
    expect(at(48)).toEqual({ a: '2026-12-01T08:00:00+01:00' });
    expect(at(24)).toEqual({ a: '2026-12-03T08:00:00+01:00' });
  });
  it('stays within one open stretch of its rig', () => {
    const rigs = [{ id: 'rig', open: [{ rrule: 'FREQ=DAILY', from: '10:00', to: '14:00' }] }];
    const of = (minutes: number) =>
      week({ rigs, bookings: [{ id: 'a', minutes, attended: [], rigs: ['rig'] }] });
    expect(starts(of(240))).toEqual({ a: '2026-12-01T10:00:00+01:00' });
    expect(reason(of(241))).toContain('never free and open for 4 h 1 min on end');
  });
});

describe('several bookings', () => {
  const alone = (id: string, over = {}) => ({
    id,
    minutes: 60,
    attended: [],
    rigs: ['rig'],
    ...over,
  });
  it('share a rig up to its capacity, less what is busy', () => {
    const busy = [
      { rig: 'rig', from: '2026-12-01T08:00:00+01:00', to: '2026-12-01T08:30:00+01:00' },
    ];
    const bookings = [alone('a'), alone('b')];
    const rigs = [{ id: 'rig', capacity: 2 }];
    expect(Object.values(starts(week({ bookings, rigs }))).sort()).toEqual([
      '2026-12-01T08:00:00+01:00',
      '2026-12-01T08:00:00+01:00',
    ]);
    expect(Object.values(starts(week({ bookings, rigs, busy }))).sort()).toEqual([
      '2026-12-01T08:00:00+01:00',
      '2026-12-01T08:30:00+01:00',
    ]);
  });
  it('keep the gap in elapsed minutes from end to start, and the rig of their twin', () => {
    const bookings = [
      alone('a', { rigs: ['two'] }),
      alone('b', { rigs: ['one', 'two'], sameRigAs: 'a', after: [{ id: 'a', gapMin: 90 }] }),
    ];
    const answer = run(week({ bookings, rigs: [{ id: 'one' }, { id: 'two' }] }));
    expect(answer.placements[1]).toMatchObject({ start: '2026-12-01T10:30:00+01:00', rig: 'two' });
  });
  it('push a predecessor later when its successor could not follow in time', () => {
    // b must start within 30 min of a's end, and only from 14:00 is anybody there.
    const people = [{ id: 'mira', hours: [{ rrule: 'FREQ=DAILY', from: '14:00', to: '17:00' }] }];
    const bookings = [
      alone('a'),
      alone('b', { attended: setting, after: [{ id: 'a', gapMin: 0, gapMax: 30 }] }),
    ];
    expect(starts(week({ people, bookings }))).toEqual({
      a: '2026-12-01T12:30:00+01:00',
      b: '2026-12-01T14:00:00+01:00',
    });
  });
  it('let one person do one round at two vessels at once, and only a round', () => {
    const two = (round?: string) =>
      week({
        rigs: [{ id: 'one' }, { id: 'two' }],
        bookings: ['one', 'two'].map((rig) => ({
          id: rig,
          minutes: 60,
          attended: [{ at: 0, minutes: 30, round }],
          rigs: [rig],
        })),
      });
    expect(run(two('morning')).cost[1]).toBe(120);
    expect(run(two()).cost[1]).toBe(150);
  });
  it('split the daily maximum at local midnight and respect rest', () => {
    const night = [{ id: 'mira', hours: [ALWAYS], maxMinutesPerDay: 60 }];
    const long = { id: 'a', minutes: 120, attended: [{ at: 0, minutes: 120 }], rigs: ['rig'] };
    // 120 min fit only half before and half after midnight.
    expect(starts(week({ people: night, bookings: [long] }))).toEqual({
      a: '2026-12-01T23:00:00+01:00',
    });
    const rested = [{ id: 'mira', hours: [ALWAYS], minRestHours: 11 }];
    const busy = [
      { person: 'mira', from: '2026-11-30T20:00:00+01:00', to: '2026-11-30T23:00:00+01:00' },
    ];
    expect(starts(week({ people: rested, busy, bookings: [{ ...long, minutes: 60 }] }))).toEqual({
      a: '2026-12-01T10:00:00+01:00',
    });
  });
  it('go in the order that costs least', () => {
    // Weight over minutes: b first saves 4 × 60 at a price of 30.
    const bookings = [alone('a'), alone('b', { minutes: 30, weight: 4 })];
    expect(run(week({ bookings })).cost).toEqual([0, 4 * 30 + 90, 0]);
  });
  it('even out the load when times are the same', () => {
    const people = ['mira', 'jo'].map((id) => ({ id, hours: [DAILY] }));
    const bookings = ['a', 'b', 'c', 'd'].map((id) => alone(id, { attended: setting }));
    expect(run(week({ people, bookings })).cost[2]).toBe(0);
  });
  it('none at all is an answer too', () => {
    expect(run(week({}))).toEqual({ placements: [], unplaced: [], finish: null, cost: [0, 0, 0] });
  });
});
