import { describe, expect, test } from 'vitest';
import { drawnEnd, isOpen, withoutClosures } from '@/components/calendar/open-hours';

const at = (clock: string) => `2026-12-01T${clock}:00.000Z`;
const span = (from: string, to: string) => ({ from: at(from), to: at(to) });

describe('open hours of the calendar', () => {
  test('an end is no longer open, a beginning is', () => {
    const open = [span('07:00', '15:00')];
    expect(isOpen(new Date(at('07:00')), open)).toBe(true);
    expect(isOpen(new Date(at('15:00')), open)).toBe(false);
    expect(isOpen(new Date(at('06:59')), open)).toBe(false);
  });
  test('a closure inside cuts in two, across an end shortens, beside changes nothing', () => {
    const open = [span('07:00', '15:00')];
    expect(withoutClosures(open, [span('10:00', '11:00')])).toEqual([
      span('07:00', '10:00'),
      span('11:00', '15:00'),
    ]);
    expect(withoutClosures(open, [span('14:00', '20:00')])).toEqual([span('07:00', '14:00')]);
    expect(withoutClosures(open, [span('15:00', '20:00')])).toEqual(open);
    expect(withoutClosures(open, [span('00:00', '23:00')])).toEqual([]);
  });
  test('a visit of five minutes is drawn a line of text tall, longer ones as they are', () => {
    const from = new Date(at('09:00'));
    expect(drawnEnd(from, new Date(at('09:05')))).toEqual(new Date(at('09:15')));
    expect(drawnEnd(from, new Date(at('10:00')))).toEqual(new Date(at('10:00')));
  });
});
