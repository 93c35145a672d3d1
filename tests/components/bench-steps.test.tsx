import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, test } from 'vitest';
import { BenchHead } from '@/components/bench/bench-head';
import { Countdown, windowWords } from '@/components/bench/countdown';
import { ExceptionKeys } from '@/components/bench/exception-keys';
import { moved } from '@/components/bench/value-field';
import { type StepVisit, stepsOf } from '@/lib/server/bench/steps';

const HOUR = 3_600_000;
const zero = new Date('2026-12-01T09:10:00Z');
const later = (hours: number) => new Date(zero.getTime() + hours * HOUR);

const visit = (
  of: Partial<StepVisit> & Pick<StepVisit, 'id' | 'kind' | 'atMinutes'>,
): StepVisit => ({
  label: of.kind === 'set dose' ? 'Set the dose' : 'Collect and upload',
  earliest: later(of.atMinutes / 60),
  latest: later(of.atMinutes / 60 + 4),
  doneAt: null,
  outcome: null,
  ...of,
});

const facts = {
  preparation: 'B',
  rig: 'Plate reader',
  dose: '84.26 \u00b5mol/L',
  doseLabel: 'inhibitor',
  started: false,
  zero,
};

describe('due times of a session', () => {
  test('the first visit is due at the appointment, not at the first minute of its window', () => {
    const collect = visit({ id: 'c', kind: 'collect', atMinutes: 17 * 60 });
    const [start, step] = stepsOf([collect], { ...facts, startsAt: later(20) });
    expect(start?.due).toBe(later(20).toISOString());
    expect(step?.due).toBe(later(20).toISOString());
    expect(step?.earliest).toBe(later(17).toISOString());
  });
  test('an appointment outside the window, after a late setting, is drawn into it', () => {
    const collect = visit({ id: 'c', kind: 'collect', atMinutes: 17 * 60 });
    const [, early] = stepsOf([collect], { ...facts, startsAt: later(15) });
    expect(early?.due).toBe(later(17).toISOString());
    const [, late] = stepsOf([collect], { ...facts, startsAt: later(30) });
    expect(late?.due).toBe(later(21).toISOString());
  });
  test('the setting is due at its appointment, whatever its window says', () => {
    const set = visit({ id: 'a', kind: 'set dose', atMinutes: 0, latest: zero });
    const [, step] = stepsOf([set], { ...facts, startsAt: later(1) });
    expect(step?.due).toBe(later(1).toISOString());
  });
  test('later visits keep their own minute, though never before the appointment', () => {
    const visits = [
      visit({ id: 'b', kind: 'sample', atMinutes: 120, earliest: later(0) }),
      visit({ id: 'a', kind: 'set dose', atMinutes: 0, earliest: later(-1) }),
    ];
    const steps = stepsOf(visits, { ...facts, startsAt: zero });
    expect(steps.map((s) => s.key)).toEqual(['start', 'a', 'b']);
    expect(steps[2]?.due).toBe(later(2).toISOString());
    const moved = stepsOf(visits, { ...facts, startsAt: later(3) });
    expect(moved[2]?.due).toBe(later(3).toISOString());
  });
});

describe('words of the window', () => {
  const clock = (at: number) => new Date(at).toISOString().slice(11, 16);
  const due = zero.getTime();
  const words = (before: number, after: number) =>
    windowWords({ earliest: due - before * 60_000, due, latest: due + after * 60_000 }, clock);
  test('both sides, one side, none', () => {
    expect(words(10, 10)).toBe('10\u202fmin either side is on time');
    expect(words(0, 240)).toBe('until 13:10 is on time');
    expect(words(60, 0)).toBe('from 08:10 is on time');
    expect(words(60, 10)).toBe('08:10 to 09:20 is on time');
    expect(words(0, 0)).toBe('');
  });
  test('beyond an hour the counter is in words, and tomorrow has its day', () => {
    const markup = renderToStaticMarkup(
      <Countdown
        now="2026-12-01T15:12:00Z"
        zone="Europe/Berlin"
        what="this step"
        due="2026-12-02T06:00:00Z"
        earliest="2026-12-02T02:05:00Z"
        latest="2026-12-02T06:05:00Z"
        trackFrom="2026-12-01T15:00:00Z"
        trackTo="2026-12-02T07:00:00Z"
      />,
    );
    expect(markup).toContain('14\u202fh 48\u202fmin');
    expect(markup).not.toContain('14:48:00');
    expect(markup).toContain('Wed 2 Dec, 07:00');
    expect(markup).toContain('03:05 to 07:05 is on time');
  });
});

describe('bench head and keys', () => {
  test('a control value without a unit is followed by its comma', () => {
    const head = { identity: 'B', line: 'Ring', tail: ', run 11', when: 'day 0, hour 6' };
    const text = renderToStaticMarkup(
      <BenchHead {...head} control={{ value: '3', unit: '1' }} dose="84" doseUnit="umol/L" />,
    ).replace(/<[^>]+>/g, '');
    expect(text).toContain('3, day 0, hour 6');
    const with_ = renderToStaticMarkup(
      <BenchHead {...head} control={{ value: '0.64', unit: '1/d' }} dose="10" doseUnit="mL/h" />,
    ).replace(/<[^>]+>/g, '');
    expect(with_).toContain('0.64\u202f/d, day 0');
    expect(with_).toContain('Ring, run 11');
  });
  test('a lost preparation has a key of its own, said in full', () => {
    const markup = renderToStaticMarkup(<ExceptionKeys onLost={() => undefined} />);
    expect(markup.replace(/<[^>]+>/g, '')).toContain('Lost preparation');
  });
  test('the first press of an empty read-back gives what was planned', () => {
    const field = { id: 'v', label: 'Read back', unit: 'umol/L', step: 1, from: 84.26 };
    expect(moved({ ...field, value: '' }, 1)).toBe('84.26');
    expect(moved({ ...field, value: '84.26' }, -1)).toBe('83.26');
  });
});
