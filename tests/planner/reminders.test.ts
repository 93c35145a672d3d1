import { describe, expect, it } from 'vitest';
import {
  cancelledReminders,
  digestOfMissed,
  type RemindedSession,
  remindersFor,
} from '@/lib/planner/reminders-due/reminders-due';

const session = (over: Partial<RemindedSession> = {}): RemindedSession => ({
  id: 's1',
  startsAt: '2026-12-03T09:00:00+01:00',
  sequence: 4,
  personIds: ['mira', 'jo'],
  ...over,
});
const due = (s: RemindedSession, now: string, preferences = {}) =>
  remindersFor(s, preferences, now).map((r) => [r.key, r.dueAt]);

describe('reminders of a session', () => {
  it('go to each person a day and an hour before, keyed by session, person, offset, sequence', () => {
    expect(due(session(), '2026-12-01T00:00:00Z')).toEqual([
      ['s1:jo:1440:4', '2026-12-02T08:00:00.000Z'],
      ['s1:mira:1440:4', '2026-12-02T08:00:00.000Z'],
      ['s1:jo:60:4', '2026-12-03T07:00:00.000Z'],
      ['s1:mira:60:4', '2026-12-03T07:00:00.000Z'],
    ]);
  });
  it('count 24 elapsed hours across a change of clocks', () => {
    // 09:00 +02:00 on 29 March less 24 h is 08:00 +01:00 on the 28th (07:00Z).
    const spring = session({ startsAt: '2026-03-29T09:00:00+02:00', personIds: ['mira'] });
    expect(due(spring, '2026-03-01T00:00:00Z')[0]?.[1]).toBe('2026-03-28T07:00:00.000Z');
  });
  it('are not owed once they are past by more than the grace', () => {
    const one = session({ personIds: ['mira'] });
    expect(due(one, '2026-12-02T08:15:00Z').map((r) => r[0])).toEqual([
      's1:mira:1440:4',
      's1:mira:60:4',
    ]);
    expect(due(one, '2026-12-02T08:15:01Z').map((r) => r[0])).toEqual(['s1:mira:60:4']);
    expect(due(one, '2026-12-03T07:15:01Z')).toEqual([]);
  });
  it('are not owed once the session has begun, even within the grace', () => {
    const near = { offsetsMinutes: [5] };
    expect(due(session(), '2026-12-03T07:59:59Z', near)).toHaveLength(2);
    expect(due(session(), '2026-12-03T08:00:00Z', near)).toEqual([]);
  });
  it.each(['started', 'done', 'missed', 'suspended', 'cancelled'] as const)(
    'are not owed for a session that is %s',
    (state) => expect(due(session({ state }), '2026-12-01T00:00:00Z')).toEqual([]),
  );
  it('follow the wishes of the lab and of the person, none when none is wished', () => {
    const preferences = { offsetsMinutes: [120, 120], byPerson: { jo: { offsetsMinutes: [] } } };
    expect(due(session(), '2026-12-01T00:00:00Z', preferences).map((r) => r[0])).toEqual([
      's1:mira:120:4',
    ]);
  });
  it('refuse times and offsets that are none', () => {
    expect(() => due(session({ startsAt: 'soon' }), '2026-12-01T00:00:00Z')).toThrow('startsAt');
    expect(() => due(session(), 'now')).toThrow('now is no moment');
    expect(() => due(session(), '2026-12-01T00:00:00Z', { offsetsMinutes: [-5] })).toThrow('-5');
  });
});

describe('unsent reminders die', () => {
  const rows = remindersFor(session(), {}, '2026-12-01T00:00:00Z');
  it('not while nothing changes', () => expect(cancelledReminders(rows, [session()])).toEqual([]));
  it('with a move, a cancellation or the session itself', () => {
    expect(cancelledReminders(rows, [session({ sequence: 5 })])).toHaveLength(4);
    expect(cancelledReminders(rows, [session({ state: 'cancelled' })])).toHaveLength(4);
    expect(cancelledReminders(rows, [])).toHaveLength(4);
  });
  it('for the person who leaves the session alone', () => {
    const gone = cancelledReminders(rows, [session({ personIds: ['mira'] })]);
    expect(gone.sort()).toEqual(['s1:jo:1440:4', 's1:jo:60:4']);
  });
  it('and a moved session owes new keys, never an old one again', () => {
    const old = new Set(rows.map((r) => r.key));
    const fresh = remindersFor(session({ sequence: 5 }), {}, '2026-12-01T00:00:00Z');
    expect(fresh.filter((r) => old.has(r.key))).toEqual([]);
  });
});

describe('after a time without mail', () => {
  const rows = [
    ...remindersFor(session(), {}, '2026-12-01T00:00:00Z'),
    ...remindersFor(
      session({ id: 's2', startsAt: '2026-12-02T20:00:00Z', personIds: ['mira'] }),
      {},
      '2026-12-01T00:00:00Z',
    ),
  ];
  it('each person gets one digest, past and coming sessions apart', () => {
    const digests = digestOfMissed(rows, '2026-12-02T21:00:00Z');
    expect(digests.map((d) => d.recipient)).toEqual(['jo', 'mira']);
    const mira = digests[1]!;
    expect(mira.begun.map((s) => s.session)).toEqual(['s2']);
    expect(mira.coming.map((s) => s.session)).toEqual(['s1']);
    expect(mira.covers.sort()).toEqual(['s1:mira:1440:4', 's2:mira:1440:4', 's2:mira:60:4']);
  });
  it('covered rows are owed singly no more, the others still are', () => {
    const now = '2026-12-02T21:00:00Z';
    const covered = new Set(digestOfMissed(rows, now).flatMap((d) => d.covers));
    const owed = remindersFor(session(), {}, now).map((r) => r.key);
    expect(owed.sort()).toEqual(['s1:jo:60:4', 's1:mira:60:4']);
    expect(owed.filter((k) => covered.has(k))).toEqual([]);
  });
  it('the same rows give the same key, another outage another', () => {
    const key = (now: string) => digestOfMissed(rows, now)[1]?.key;
    expect(key('2026-12-02T21:00:00Z')).toBe(key('2026-12-02T22:00:00Z'));
    expect(key('2026-12-02T21:00:00Z')).not.toBe(key('2026-12-03T12:00:00Z'));
  });
  it('nothing overdue, no digest', () => {
    expect(digestOfMissed(rows, '2026-12-01T00:00:00Z')).toEqual([]);
  });
});
