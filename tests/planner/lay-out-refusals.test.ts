import { describe, expect, it } from 'vitest';
import { EngineError } from '@/lib/contracts/common';
import { layOut } from '@/lib/planner/lay-out/lay-out';
import { type Input, run, week } from './lay-out-helpers';
import { DAILY, request, WEEKDAYS } from './lay-out-instances';

const reason = (input: Input) =>
  run(input)
    .unplaced.map((u) => u.reason)
    .join(' | ');
const setting = [{ at: 0, minutes: 10 }];

describe('what cannot be placed says why, so that a head can act', () => {
  const one = (over = {}) => [{ id: 'a', minutes: 60, attended: setting, rigs: ['rig'], ...over }];
  const fullRig = [
    { rig: 'rig', from: '2026-12-01T00:00:00+01:00', to: '2026-12-07T23:30:00+01:00' },
  ];
  it.each<[string, Partial<Input>, string]>([
    [
      'skill',
      { bookings: one({ skills: ['perfusion'] }) },
      'Nobody with *perfusion* is among the people',
    ],
    [
      'people',
      { bookings: one({ attended: [{ at: 0, minutes: 5, people: 2 }] }) },
      'two people at once; there is only one',
    ],
    ['span', { bookings: one({ minutes: 20000 }) }, 'It takes 13 d 21 h; the plan spans only 7 d'],
    [
      'rig',
      { bookings: one({ minutes: 600 }), busy: fullRig },
      'rig is never free and open for 10 h on end before Tue 8 Dec 08:00',
    ],
    [
      'hours',
      { bookings: one({ attended: [{ at: 0, minutes: 600 }], minutes: 600 }) },
      'Nobody works for 10 h on end between Tue 1 Dec 08:00 and Tue 8 Dec 08:00',
    ],
    [
      'together',
      {
        bookings: one({ minutes: 30 }),
        busy: fullRig,
        people: [{ id: 'mira', hours: [{ ...DAILY, to: '16:00' }] }],
        notAfter: '2026-12-08T08:00:00+01:00',
      },
      'Nobody can come to the visit at the start at any time at which rig is free',
    ],
    [
      'visits',
      { bookings: one({ minutes: 800, attended: [...setting, { at: 720, minutes: 10 }] }) },
      '2 visits cannot all be attended',
    ],
    [
      'gap',
      {
        bookings: [
          ...one(),
          { ...one()[0]!, id: 'b', after: [{ id: 'a', gapMin: 600, gapMax: 610 }] },
        ],
        people: [{ id: 'mira', hours: [WEEKDAYS], maxMinutesPerDay: 10 }],
      },
      'must start between',
    ],
    [
      'others',
      {
        bookings: [
          { ...one()[0]!, id: 'z', minutes: 10000, weight: 9, attended: [] },
          { ...one()[0]!, id: 'y', minutes: 9900, attended: [] },
        ],
      },
      'Other bookings hold rig',
    ],
    [
      'predecessor',
      {
        bookings: [
          ...one({ skills: ['x'] }),
          { ...one()[0]!, id: 'b', after: [{ id: 'a', gapMin: 0 }] },
        ],
      },
      'It follows "a", which is not placed',
    ],
  ])('%s', (_, over, text) => expect(reason(week(over))).toContain(text));
});

describe('requests that cannot be answered', () => {
  const a = { id: 'a', minutes: 60, attended: [], rigs: ['rig'] };
  const follow = (id: string) => [{ id, gapMin: 0 }];
  it.each<[string, Partial<Input>, string]>([
    ['unknown zone', { timeZone: 'Mars/Olympus' }, 'timeZone'],
    ['an end before the start', { notAfter: '2026-11-01T00:00:00Z' }, 'notAfter'],
    ['an unknown rig', { bookings: [{ ...a, rigs: ['rig', 'none'] }] }, 'bookings.0.rigs.1'],
    ['an unknown twin', { bookings: [{ ...a, sameRigAs: 'z' }] }, 'bookings.0.sameRigAs'],
    [
      'an unknown predecessor',
      { bookings: [{ ...a, after: follow('z') }] },
      'bookings.0.after.0.id',
    ],
    ['a booking after itself', { bookings: [{ ...a, after: follow('a') }] }, 'bookings.0.after'],
    [
      'a cycle',
      {
        bookings: [a, { ...a, id: 'b', after: follow('c') }, { ...a, id: 'c', after: follow('b') }],
      },
      'bookings.1.after',
    ],
    [
      'gapMax below gapMin',
      { bookings: [a, { ...a, id: 'b', after: [{ id: 'a', gapMin: 9, gapMax: 8 }] }] },
      'bookings.1.after.0.gapMax',
    ],
    ['the same id twice', { bookings: [a, a] }, 'bookings.1.id'],
    [
      'unknown busy person',
      { busy: [{ person: 'eve', from: '2026-12-01T08:00:00Z', to: '2026-12-01T09:00:00Z' }] },
      'busy.0.person',
    ],
    [
      'a busy stretch of nothing',
      { busy: [{ from: '2026-12-01T08:00:00Z', to: '2026-12-01T09:00:00Z' }] },
      'busy.0',
    ],
    [
      'an absence that ends first',
      {
        people: [
          {
            id: 'mira',
            hours: [DAILY],
            away: [{ from: '2026-12-02T08:00:00Z', to: '2026-12-01T09:00:00Z' }],
          },
        ],
      },
      'people.0.away.0.to',
    ],
    [
      'hours that are no recurrence',
      { people: [{ id: 'mira', hours: [DAILY, { ...DAILY, rrule: 'daily' }] }] },
      'people.0.hours.1.rrule',
    ],
  ])('%s', (_, over, at) => {
    try {
      layOut(request(week(over)));
      expect.unreachable('it was answered');
    } catch (error) {
      expect(error).toBeInstanceOf(EngineError);
      expect(error).toMatchObject({ code: 'invalid-request', at });
    }
  });
});
