import { describe, expect, it } from 'vitest';
import { EngineError } from '@/lib/contracts/common';
import { explainHours } from '@/lib/planner/lay-out/explain-hours';
import { expandHours, openIntervals } from '@/lib/planner/lay-out/hours';
import { HOUR, parseZone, toIso, wallToInstant } from '@/lib/planner/lay-out/time';

const wall = (text: string) => Date.parse(`${text}:00Z`);
const instant = (zone: string, text: string) =>
  new Date(wallToInstant(wall(text), parseZone(zone))).toISOString();

describe('a local wall time means one instant (RFC 5545 section 3.3.5)', () => {
  // Both New York cases are the examples printed in RFC 5545 section 3.3.5.
  it('that occurs twice is its first occurrence', () => {
    expect(instant('America/New_York', '2007-11-04T01:30')).toBe('2007-11-04T05:30:00.000Z');
    // 2026-10-25: 03:00 CEST (+02:00) goes back to 02:00; the first 02:30 is still summer time.
    expect(instant('Europe/Berlin', '2026-10-25T02:30')).toBe('2026-10-25T00:30:00.000Z');
  });
  it('that does not occur is read with the offset before the gap', () => {
    expect(instant('America/New_York', '2007-03-11T02:30')).toBe('2007-03-11T07:30:00.000Z');
    // 2026-03-29: 02:00 CET (+01:00) goes on to 03:00; 02:30 read at +01:00 is 01:30Z.
    expect(instant('Europe/Berlin', '2026-03-29T02:30')).toBe('2026-03-29T01:30:00.000Z');
  });
  it('holds beside the changes and far from Greenwich', () => {
    expect(instant('Europe/Berlin', '2026-03-29T01:59')).toBe('2026-03-29T00:59:00.000Z');
    expect(instant('Europe/Berlin', '2026-03-29T03:00')).toBe('2026-03-29T01:00:00.000Z');
    expect(instant('Europe/Berlin', '2026-10-25T03:00')).toBe('2026-10-25T02:00:00.000Z');
    expect(instant('Pacific/Kiritimati', '2026-01-01T00:00')).toBe('2025-12-31T10:00:00.000Z');
    expect(instant('Asia/Kathmandu', '2026-01-01T00:00')).toBe('2025-12-31T18:15:00.000Z');
  });
});

describe('elapsed time across a clock change', () => {
  // Arithmetic on UTC, worked by hand: start + 6 h, then the zone's offset after the change.
  it.each([
    ['Europe/Berlin', '2026-03-28T22:00:00+01:00', '2026-03-29T05:00:00+02:00'],
    ['Europe/Berlin', '2026-10-24T22:00:00+02:00', '2026-10-25T03:00:00+01:00'],
    ['America/New_York', '2026-03-07T22:00:00-05:00', '2026-03-08T05:00:00-04:00'],
    ['America/New_York', '2026-10-31T22:00:00-04:00', '2026-11-01T03:00:00-05:00'],
  ])('%s %s plus 6 h', (zone, from, to) => {
    expect(toIso(Date.parse(from) + 6 * HOUR, parseZone(zone))).toBe(to);
  });
});

const spans = (
  rule: { rrule: string; from: string; to: string },
  zone: string,
  from: string,
  until: string,
) =>
  expandHours([rule], parseZone(zone), Date.parse(from), Date.parse(until)).map((s) => [
    toIso(s.from, parseZone(zone)),
    toIso(s.to, parseZone(zone)),
  ]);

describe('working hours', () => {
  it('keep their wall time across the change of clocks', () => {
    const rule = { rrule: 'FREQ=DAILY', from: '08:00', to: '17:00' };
    const got = spans(
      rule,
      'Europe/Berlin',
      '2026-03-28T06:00:00+01:00',
      '2026-03-29T20:00:00+02:00',
    );
    expect(got).toEqual([
      ['2026-03-28T08:00:00+01:00', '2026-03-28T17:00:00+01:00'],
      ['2026-03-29T08:00:00+02:00', '2026-03-29T17:00:00+02:00'],
    ]);
  });
  it('of a night are an hour shorter in spring and longer in autumn', () => {
    const rule = { rrule: 'FREQ=DAILY;COUNT=1', from: '22:00', to: '06:00' };
    const length = (zone: string, from: string, until: string) => {
      const [s] = expandHours([rule], parseZone(zone), Date.parse(from), Date.parse(until));
      return (s!.to - s!.from) / HOUR;
    };
    expect(length('Europe/Berlin', '2026-03-28T12:00Z', '2026-03-30T12:00Z')).toBe(7);
    expect(length('Europe/Berlin', '2026-10-24T12:00Z', '2026-10-26T12:00Z')).toBe(9);
    expect(length('America/New_York', '2026-03-07T17:00Z', '2026-03-09T12:00Z')).toBe(7);
    expect(length('America/New_York', '2026-10-31T17:00Z', '2026-11-02T12:00Z')).toBe(9);
  });
  it('start with the local date of the plan, not before and not by the UTC date', () => {
    const rule = { rrule: 'FREQ=DAILY;INTERVAL=2', from: '22:00', to: '06:00' };
    // 03:00 local on the 2nd is still the 1st in no zone that matters; UTC says 08:00 on the 2nd.
    const got = spans(rule, 'America/New_York', '2026-12-02T04:30:00Z', '2026-12-05T12:00:00Z');
    // 04:30Z on the 2nd is 23:30 on the 1st in New York: nights of the 1st, 3rd and 5th.
    expect(got.map((s) => s[0])).toEqual([
      '2026-12-01T22:00:00-05:00',
      '2026-12-03T22:00:00-05:00',
      '2026-12-05T22:00:00-05:00',
    ]);
  });
  it('on weekdays hold the right weekdays east and west of Greenwich', () => {
    const rule = { rrule: 'FREQ=WEEKLY;BYDAY=MO', from: '00:30', to: '23:30' };
    // 2026-12-07 is a Monday.
    for (const zone of ['Pacific/Auckland', 'America/Los_Angeles', 'Europe/Berlin']) {
      const got = spans(rule, zone, '2026-12-02T12:00:00Z', '2026-12-12T12:00:00Z');
      expect(got.map((s) => s[0]?.slice(0, 10))).toEqual(['2026-12-07']);
    }
  });
  it('end with UNTIL: a bare date to the end of that day, a UTC moment by the lab clock', () => {
    const until = (u: string) =>
      spans(
        { rrule: `FREQ=DAILY;UNTIL=${u}`, from: '08:00', to: '09:00' },
        'America/New_York',
        '2026-12-01T12:00:00Z',
        '2026-12-10T12:00:00Z',
      ).length;
    expect(until('20261203')).toBe(3);
    expect(until('20261203T125959Z')).toBe(2);
    expect(until('20261203T130000Z')).toBe(3);
    expect(until('20261203T080000')).toBe(3);
  });
  it('that swallow themselves in the spring gap are left out', () => {
    const rule = { rrule: 'FREQ=DAILY;COUNT=1', from: '02:30', to: '03:00' };
    expect(spans(rule, 'Europe/Berlin', '2026-03-29T00:00Z', '2026-03-30T00:00Z')).toEqual([]);
  });
});

describe('hours that cannot be read', () => {
  it.each([
    ['', 'no recurrence'],
    ['every day', 'no recurrence'],
    ['FREQ=SOMETIMES', 'Working hours repeat'],
    ['FREQ=HOURLY', 'Working hours repeat'],
    ['FREQ=DAILY;INTERVAL=0', 'whole numbers'],
    ['FREQ=DAILY;INTERVAL=x', 'whole numbers'],
    ['FREQ=DAILY;COUNT=0', 'whole numbers'],
    ['FREQ=WEEKLY;BYDAY=XX', 'no recurrence'],
    ['FREQ=DAILY;BYHOUR=9', 'Clock times belong'],
    ['DTSTART:20260101T000000Z\nRRULE:FREQ=DAILY', 'Leave DTSTART'],
    ['FREQ=DAILY;COUNT=3;UNTIL=20260101', 'never stand together'],
    ['FREQ=DAILY;UNTIL=soon', 'no recurrence'],
  ])('%j is refused with the place and the remedy', (rrule, text) => {
    const read = () =>
      expandHours(
        [{ rrule, from: '08:00', to: '09:00' }],
        parseZone('Europe/Berlin'),
        0,
        HOUR,
        'h',
      );
    expect(read).toThrow(EngineError);
    expect(read).toThrow(text);
    try {
      read();
    } catch (error) {
      expect(error).toMatchObject({ code: 'invalid-request', at: 'h.0.rrule' });
    }
  });
  it('name a zone that does not exist', () => {
    expect(() => parseZone('Mars/Olympus')).toThrow('no time zone');
  });
});

describe('a recurrence that never comes', () => {
  it.each([
    'FREQ=DAILY;BYMONTH=2;BYMONTHDAY=30',
    'FREQ=WEEKLY;BYSETPOS=9;BYDAY=MO',
    'FREQ=YEARLY;BYMONTH=2;BYMONTHDAY=30',
    'FREQ=DAILY;BYMONTHDAY=45',
  ])('%s is empty sooner than a century of days is listed', (rrule) => {
    const timed = (rule: string, until: string) => {
      const began = performance.now();
      const hours = { rrule: rule, from: '08:00', to: '09:00' };
      const got = spans(hours, 'Europe/Berlin', '2026-01-01T00:00Z', until);
      return { got, took: performance.now() - began };
    };
    // A rule that is searched up to the year 9999 takes longer than listing every day of a hundred years.
    const century = timed('FREQ=DAILY', '2126-01-01T00:00Z');
    const never = timed(rrule, '2028-01-01T00:00Z');
    expect(never.got).toEqual([]);
    expect(never.took).toBeLessThan(century.took);
  });
  it.each([
    ['FREQ=DAILY', 3653],
    ['FREQ=WEEKLY;BYDAY=MO,TU,WE,TH,FR,SA,SU', 3653],
    ['FREQ=MONTHLY;BYMONTHDAY=-1', 120],
    ['FREQ=MONTHLY;BYDAY=-1FR', 120],
    ['FREQ=YEARLY;BYMONTH=2;BYMONTHDAY=29', 2],
  ])('%s over ten years loses none of its days', (rrule, days) => {
    // Counted by hand: 2026 to 2035 hold 3652 days with 29 February in 2028 and 2032, plus the 1st.
    const got = expandHours(
      [{ rrule, from: '08:00', to: '09:00' }],
      parseZone('Europe/Berlin'),
      Date.parse('2026-01-01T12:00Z'),
      Date.parse('2036-01-01T12:00Z'),
    );
    expect(got).toHaveLength(days);
  });
});

describe('open intervals for drawing', () => {
  it('show the night that began on the eve, cut at the edges of the day', () => {
    const night = { rrule: 'FREQ=DAILY', from: '22:00', to: '06:00' };
    const day = ['2026-12-02T00:00:00+01:00', '2026-12-03T00:00:00+01:00'] as const;
    expect(openIntervals([night], 'Europe/Berlin', ...day)).toEqual([
      { from: '2026-12-02T00:00:00+01:00', to: '2026-12-02T06:00:00+01:00' },
      { from: '2026-12-02T22:00:00+01:00', to: '2026-12-03T00:00:00+01:00' },
    ]);
  });
  it('count an interval from the anchor that is given', () => {
    const rule = { rrule: 'FREQ=DAILY;INTERVAL=3', from: '08:00', to: '09:00' };
    const got = openIntervals(
      [rule],
      'Europe/Berlin',
      '2026-12-05T00:00:00+01:00',
      '2026-12-09T00:00:00+01:00',
      '2026-12-01T00:00:00+01:00',
    );
    expect(got.map((s) => s.from)).toEqual(['2026-12-07T08:00:00+01:00']);
  });
});

describe('hours in words', () => {
  const explain = (rrule: string, from = '08:00', to = '17:00') =>
    explainHours({ rrule, from, to }, 'Europe/Berlin');
  it.each([
    ['FREQ=WEEKLY;BYDAY=MO,TU,WE,TH,FR', 'Mon to Fri, 08:00–17:00'],
    ['RRULE:FREQ=WEEKLY;BYDAY=MO,WE', 'Mon and Wed, 08:00–17:00'],
    ['FREQ=WEEKLY;BYDAY=SA,SU', 'Sat and Sun, 08:00–17:00'],
    ['FREQ=DAILY', 'every day, 08:00–17:00'],
    ['FREQ=DAILY;INTERVAL=2', 'every 2nd day, 08:00–17:00'],
    ['FREQ=WEEKLY;INTERVAL=2;BYDAY=TU', 'Tue, every 2nd week, 08:00–17:00'],
    ['FREQ=MONTHLY;BYDAY=1MO', '1st Mon, every month, 08:00–17:00'],
    ['FREQ=MONTHLY;BYMONTHDAY=15', 'the 15th, every month, 08:00–17:00'],
    ['FREQ=DAILY;UNTIL=20261224', 'every day, until Thu 24 Dec 2026, 08:00–17:00'],
    ['FREQ=DAILY;COUNT=5', 'every day, 5 times, 08:00–17:00'],
  ])('%s', (rrule, text) => expect(explain(rrule)).toBe(text));
  it('say when a night ends on the next day', () => {
    expect(explain('FREQ=DAILY', '22:00', '06:00')).toBe('every day, 22:00–06:00 the next day');
    expect(explainHours([], 'Europe/Berlin')).toBe('never');
  });
});
