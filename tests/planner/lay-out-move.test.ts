import { describe, expect, it } from 'vitest';
import { conflictsOfMove, type MoveChange, type MoveLab } from '@/lib/planner/lay-out/move';
import { WEEKDAYS } from './lay-out-instances';

/** December 2026 in Berlin: the 3rd is a Thursday. */
const at = (day: number, clock: string) =>
  `2026-12-${String(day).padStart(2, '0')}T${clock}:00+01:00`;

const lab = (over: Partial<MoveLab> = {}): MoveLab => ({
  timeZone: 'Europe/Berlin',
  sessions: [
    {
      id: 's1',
      booking: 'run-1',
      rig: 'flow',
      people: ['mira'],
      from: at(3, '09:00'),
      to: at(3, '09:20'),
      earliest: at(3, '08:00'),
      latest: at(4, '10:00'),
      skills: ['flow'],
    },
    {
      id: 's2',
      booking: 'run-2',
      rig: 'flow',
      people: ['jo'],
      from: at(3, '13:00'),
      to: at(3, '14:30'),
    },
    {
      id: 's3',
      booking: 'run-3',
      rig: 'bench',
      people: ['mira'],
      from: at(3, '11:00'),
      to: at(3, '11:30'),
    },
  ],
  people: [
    {
      id: 'mira',
      name: 'Mira Okafor',
      skills: ['flow'],
      hours: [{ ...WEEKDAYS, rrule: 'FREQ=DAILY' }],
      away: [{ from: at(4, '00:00'), to: at(5, '00:00') }],
    },
    { id: 'jo', name: 'Jo Lind', hours: [WEEKDAYS] },
  ],
  rigs: [{ id: 'flow', name: 'flow rig 1' }, { id: 'bench' }],
  closed: [{ from: at(24, '00:00'), to: at(27, '00:00') }],
  ...over,
});
const move = (
  from: string,
  to: string,
  more: Partial<MoveChange> = {},
  over: Partial<MoveLab> = {},
) => conflictsOfMove(lab(over), { session: 's1', from, to, ...more }).map((c) => c.text);

describe('a proposed move', () => {
  it('is free when nothing stands against it', () => {
    expect(move(at(3, '10:00'), at(3, '10:20'))).toEqual([]);
  });
  it('may touch what comes before and after', () => {
    expect(move(at(3, '11:30'), at(3, '13:00'))).toEqual([]);
  });
  it('is refused while the person is away', () => {
    expect(move(at(4, '09:00'), at(4, '09:20'))).toEqual(['Mira Okafor is away on Fri 4 Dec.']);
  });
  it('is refused where another run holds the rig', () => {
    expect(move(at(3, '14:00'), at(3, '14:20'))).toEqual([
      'flow rig 1 holds another run until 14:30.',
    ]);
    expect(move(at(3, '12:50'), at(3, '13:10'))).toEqual([
      'flow rig 1 holds another run from 13:00 until 14:30.',
    ]);
    const two = { rigs: [{ id: 'flow', capacity: 2 }, { id: 'bench' }] };
    expect(move(at(3, '14:00'), at(3, '14:20'), {}, two)).toEqual([]);
  });
  it('is refused outside the window of the visit', () => {
    const sessions = lab().sessions.map((s) => ({ ...s, latest: at(3, '10:00') }));
    expect(move(at(3, '10:05'), at(3, '10:25'), {}, { sessions })).toEqual([
      "Outside the visit's window 08:00–10:00.",
    ]);
  });
  it('is refused when nobody works, or not this person', () => {
    expect(move(at(3, '19:00'), at(3, '19:20'))).toContain(
      'Nobody works then (Thu 3 Dec 19:00–19:20).',
    );
    expect(move(at(3, '16:50'), at(3, '17:10'))).toContain(
      'Mira Okafor works 08:00–17:00 on Thu 3 Dec.',
    );
    const sunday = move(at(6, '09:00'), at(6, '09:20'), { people: ['jo'] });
    expect(sunday).toContain('Jo Lind does not work on Sun 6 Dec.');
  });
  it('is refused when the person is elsewhere, unless in the same round', () => {
    expect(move(at(3, '11:10'), at(3, '11:30'))).toEqual([
      'Mira Okafor is at another session until 11:30.',
    ]);
    const sessions = lab().sessions.map((s) => ({ ...s, round: 'noon' }));
    expect(move(at(3, '11:10'), at(3, '11:30'), {}, { sessions })).toEqual([]);
  });
  it('is refused for somebody untrained, unknown, or a rig unknown', () => {
    const here = [at(3, '10:00'), at(3, '10:20')] as const;
    expect(move(...here, { people: ['jo'] })).toEqual(['Jo Lind is not trained in *flow*.']);
    expect(move(...here, { people: ['eve'] })).toEqual(['There is no person "eve" in this lab.']);
    expect(move(...here, { rig: 'none' })).toEqual(['There is no rig "none" in this lab.']);
  });
  it('is refused in a closure', () => {
    const sessions = lab().sessions.map((s) => ({ ...s, latest: at(30, '10:00') }));
    expect(move(at(24, '09:00'), at(24, '09:20'), {}, { sessions })).toEqual([
      'The lab is closed on Thu 24 Dec, until Sun 27 Dec 00:00.',
    ]);
  });
  it('is refused when it breaks the wash-out before or after', () => {
    const gaps = [{ before: 'run-1', after: 'run-2', gapMin: 120, gapMax: 240 }];
    expect(move(at(3, '10:40'), at(3, '11:00'), {}, { gaps })).toEqual([]);
    expect(move(at(3, '10:45'), at(3, '11:05'), { people: ['jo'] }, { gaps })).toContain(
      'It leaves only 1 h 55 min to the run after it; the wash-out takes 2 h.',
    );
    expect(move(at(3, '08:00'), at(3, '08:20'), {}, { gaps })).toEqual([
      'It leaves 4 h 40 min to the run after it; at most 4 h may pass.',
    ]);
  });
  it('shifts the whole stay when the run moves, and the stay must be free and open', () => {
    const occupations = [
      { booking: 'run-1', rig: 'flow', from: at(3, '09:00'), to: at(3, '12:00') },
      { booking: 'run-2', rig: 'flow', from: at(3, '13:00'), to: at(3, '20:00') },
    ];
    const whole = { occupation: { from: at(3, '10:30'), to: at(3, '13:30') } };
    expect(move(at(3, '10:30'), at(3, '10:50'), whole, { occupations })).toEqual([
      'flow rig 1 holds another run from 13:00 until 20:00.',
    ]);
    const rigs = [{ id: 'flow', open: [{ ...WEEKDAYS, to: '12:30' }] }];
    const part = { occupation: { from: at(3, '10:00'), to: at(3, '13:00') } };
    expect(move(at(3, '10:00'), at(3, '10:20'), part, { occupations, rigs })).toEqual([
      'flow is not open all the time from Thu 3 Dec 10:00 to 13:00.',
    ]);
  });
  it('respects daily maximum and rest', () => {
    const people = (more: object) => ({ people: [{ ...lab().people[0]!, ...more }] });
    const here = [at(3, '10:00'), at(3, '10:20')] as const;
    expect(move(...here, {}, people({ maxMinutesPerDay: 50 }))).toEqual([]);
    expect(move(...here, {}, people({ maxMinutesPerDay: 49 }))).toEqual([
      'Mira Okafor would attend 50 min on Thu 3 Dec; the most is 49 min.',
    ]);
    const late = lab().sessions.map((s) =>
      s.id === 's3' ? { ...s, from: at(2, '21:00'), to: at(2, '23:30') } : s,
    );
    expect(move(...here, {}, { ...people({ minRestHours: 11 }), sessions: late })).toEqual([
      'Mira Okafor would rest only 10 h 30 min before Thu 3 Dec 10:00; 11 h are due.',
    ]);
  });
  it('says so when the session is gone or turned round', () => {
    expect(move(at(3, '10:00'), at(3, '10:00'))).toEqual([
      'The session would end before it begins.',
    ]);
    const gone = conflictsOfMove(lab(), { session: 'x', from: at(3, '10:00'), to: at(3, '11:00') });
    expect(gone.map((c) => c.code)).toEqual(['unknown-session']);
  });
  it('keeps wall hours on the day the clocks change', () => {
    // 29 March 2026, Berlin: 08:00 is 06:00Z; an hour earlier by elapsed time is before work.
    const sessions = lab().sessions.map((s) => ({ ...s, earliest: undefined, latest: undefined }));
    expect(move('2026-03-29T06:00:00Z', '2026-03-29T06:20:00Z', {}, { sessions })).toEqual([]);
    expect(move('2026-03-29T05:55:00Z', '2026-03-29T06:15:00Z', {}, { sessions })).toContain(
      'Mira Okafor works 08:00–17:00 on Sun 29 Mar.',
    );
  });
});
