import { describe, expect, test } from 'vitest';
import {
  type DueState,
  isOverdue,
  sinceDoseText,
  sortDue,
} from '@/app/(lab)/today/_components/due-order';

const row = (id: string, from: string, state: DueState) => ({
  id,
  from: `2026-12-${from}:00.000Z`,
  to: `2026-12-${from.slice(0, 6)}59:00.000Z`,
  state,
});
// A day in Berlin begins at 23:00 UTC of the day before.
const day = {
  now: '2026-12-01T13:30:00.000Z',
  dayStart: '2026-11-30T23:00:00.000Z',
  dayEnd: '2026-12-01T23:00:00.000Z',
};

describe('the lists of Today', () => {
  test('overdue first, then by time; done ones apart; later days apart', () => {
    const rows = [
      row('done', '01T06:00', 'done'),
      row('tonight', '01T17:00', 'planned'),
      row('begun', '01T09:00', 'started'),
      row('held', '01T14:00', 'suspended'),
      row('late', '01T12:00', 'planned'),
      row('after midnight there', '01T23:10', 'planned'),
      row('begun early', '02T06:00', 'started'),
    ];
    const { due, coming, done } = sortDue(rows, day);
    expect(due.map((r) => r.id)).toEqual(['late', 'begun', 'held', 'tonight', 'begun early']);
    expect(coming.map((r) => r.id)).toEqual(['after midnight there']);
    expect(done.map((r) => r.id)).toEqual(['done']);
  });
  test('a session of last week that nobody began is still due', () => {
    const old = { ...row('x', '01T06:00', 'missed'), from: '2026-11-24T06:00:00.000Z' };
    expect(sortDue([{ ...old, to: '2026-11-24T06:15:00.000Z' }], day).due).toHaveLength(1);
  });
  test('only what has not begun can be overdue', () => {
    expect(isOverdue(row('a', '01T12:00', 'planned'), day.now)).toBe(true);
    expect(isOverdue(row('a', '01T13:00', 'planned'), day.now)).toBe(false);
    expect(isOverdue(row('a', '01T12:00', 'started'), day.now)).toBe(false);
    expect(isOverdue(row('a', '01T12:00', 'done'), day.now)).toBe(false);
  });
});

test('time since the dose in the counts of the bench card', () => {
  expect(sinceDoseText(0)).toBe('sets the dose');
  expect(sinceDoseText(12)).toBe('12 min since dose');
  expect(sinceDoseText(60)).toBe('day 0, hour 1 since dose');
  expect(sinceDoseText(277 * 60)).toBe('day 11, hour 277 since dose');
});
