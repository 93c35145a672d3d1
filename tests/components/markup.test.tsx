import type { ReactElement } from 'react';
import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, test } from 'vitest';
import { BenchHead } from '@/components/bench/bench-head';
import { Countdown } from '@/components/bench/countdown';
import { ExceptionKeys } from '@/components/bench/exception-keys';
import { moved, ValueField } from '@/components/bench/value-field';
import { FormProblem, NumberField, Select } from '@/components/forms';
import { DayRule } from '@/components/frame/day-rule';
import { SignalLine, type Station } from '@/components/frame/signal-line';
import { MARK_STATES, TextureStrip, VerdictLabel, VerdictMark } from '@/components/marks';
import { RibbonDrawing } from '@/components/ribbon';
import { Caution, DataTable, IntervalFigure, Key, LoadingRibbon } from '@/components/ui';

const html = (element: ReactElement) => renderToStaticMarkup(element);
const nothing = () => undefined;

describe('marks', () => {
  test.each(MARK_STATES)('%s has a mark in its own colour and a texture', (state) => {
    expect(html(<VerdictMark state={state} alone />)).toContain(`aria-label="${state}"`);
    expect(html(<VerdictLabel state={state} />)).toMatch(
      new RegExp(`aria-hidden.*${state}</span>$`),
    );
    expect(html(<TextureStrip state={state} />)).toContain('<pattern');
  });
  test('sustained is a ring and a disc, under 9 px a disc', () => {
    expect(html(<VerdictMark state="sustained" size={12} />).match(/<circle/g)).toHaveLength(2);
    expect(html(<VerdictMark state="sustained" size={6} />).match(/<circle/g)).toHaveLength(1);
  });
});

describe('ribbon', () => {
  const data = {
    from: 0,
    to: 100,
    unit: 'umol/L',
    label: 'inducer',
    onsets: [{ value: 46, low: 38, high: 57, oscillates: 'below' as const }],
    observed: [{ value: 44, low: 40, high: 48 }],
    levels: [],
    ceiling: 90,
  };
  test.each(['list', 'card', 'page'] as const)('%s is an image with its sentence', (size) => {
    const markup = html(<RibbonDrawing {...data} size={size} />);
    expect(markup).toMatch(/^<svg[^>]*role="img"/);
    expect(markup).toContain('aria-label="Inducer from 0 to 100\u202f\u00b5mol/L.');
    expect(markup).not.toMatch(/NaN|undefined|Infinity/);
  });
  test('two ribbons of one page share no id', () => {
    const both = html(
      <div>
        <RibbonDrawing {...data} size="card" />
        <RibbonDrawing {...data} size="card" />
      </div>,
    );
    const ids = [...both.matchAll(/ id="([^"]+)"/g)].map((m) => m[1]);
    expect(new Set(ids).size).toBe(ids.length);
  });
  test('an onset outside the range and a range of no width draw no broken path', () => {
    const odd = { ...data, onsets: [{ ...data.onsets[0]!, value: 180, low: 170, high: 190 }] };
    expect(html(<RibbonDrawing {...odd} size="page" />)).not.toMatch(/NaN|Infinity/);
    expect(html(<RibbonDrawing {...data} to={0} size="page" />)).not.toMatch(/NaN|Infinity/);
  });
});

describe('frame', () => {
  const station = (name: string, state: Station['state'], missing = false): Station => ({
    name,
    state,
    missing,
    fact: 'v1',
    href: `#${name}`,
  });
  test('the signal line says what is done, where we are and where it is open', () => {
    const markup = html(
      <SignalLine
        stations={[
          station('System', 'done'),
          station('Onset', 'current', true),
          station('Report', 'later'),
        ]}
      />,
    );
    expect(markup).toContain('aria-current="step"');
    expect(markup).toContain(', here, something is missing before it');
    expect(markup).toContain('2 of 3, Onset');
  });
  test('the day rule reads out the sessions of this day alone', () => {
    const markup = html(
      <DayRule
        now="2026-12-01T13:32:00Z"
        zone="Europe/Berlin"
        open={[]}
        sessions={[
          {
            id: 'a',
            from: '2026-12-01T14:00:00Z',
            to: '2026-12-01T15:00:00Z',
            mine: true,
            title: 'Vessel B',
          },
          {
            id: 'b',
            from: '2026-12-03T14:00:00Z',
            to: '2026-12-03T15:00:00Z',
            mine: true,
            title: 'Vessel C',
          },
        ]}
      />,
    );
    expect(markup).toContain('Your session 15:00\u201316:00: Vessel B');
    expect(markup).not.toContain('Vessel C');
    expect(markup).toContain('Berlin, UTC+1');
  });
});

describe('fields and keys', () => {
  test('label, unit and problem are tied to their control', () => {
    const markup = html(
      <NumberField id="ceiling" label="Ceiling dose" unit="umol/L" problem="Raise it above 5." />,
    );
    expect(markup).toContain('for="ceiling"');
    expect(markup).toContain('aria-describedby="ceiling-problem"');
    expect(markup).toContain('aria-invalid="true"');
    expect(markup).toContain('\u00b5mol/L');
  });
  test('a select carries its name and options', () => {
    const markup = html(
      <Select id="scheme" label="Scheme" options={[{ value: 'climb', label: 'climb' }]} />,
    );
    expect(markup).toContain('name="scheme"');
    expect(markup).toContain('<option value="climb">');
  });
  test('a problem says what, where and how, and is announced', () => {
    const markup = html(
      <FormProblem
        problems={{ what: 'Too low.', where: 'Ceiling', how: 'Raise it.', fieldId: 'c' }}
      />,
    );
    expect(markup).toContain('role="alert"');
    expect(markup).toContain('href="#c"');
    expect(markup).toContain('Raise it.');
    expect(html(<FormProblem problems={[]} />)).toBe('');
  });
  test('a pending key does not press again', () => {
    expect(html(<Key pending>Save</Key>)).toMatch(
      /disabled="" aria-busy="true"|aria-busy="true"[^>]*disabled=""/,
    );
    expect(html(<Key>Save</Key>)).toContain('type="button"');
  });
});

describe('tables and states', () => {
  test('heads carry scope and unit, the naming column is a row head', () => {
    const markup = html(
      <DataTable
        caption="Levels"
        rows={[{ level: '0.32' }]}
        rowKey={(row) => row.level}
        columns={[{ key: 'l', head: 'Level', unit: '/d', strong: true, cell: (row) => row.level }]}
      />,
    );
    expect(markup).toContain('<caption class="sr-only">Levels</caption>');
    expect(markup).toMatch(/<th scope="col"[^>]*>Level<span class="block">\/d<\/span>/);
    expect(markup).toMatch(/<th scope="row"[^>]*>0.32/);
  });
  test('an interval is value and bracket; none is a dash', () => {
    const text = html(<IntervalFigure interval={{ value: 12.42, low: 10.93, high: 14.07 }} />);
    expect(text).toContain('12.4');
    expect(text).toContain('(10.9\u201314.1)');
    expect(html(<IntervalFigure interval={null} />)).toContain('\u2013');
  });
  test('progress is told in numbers and in words', () => {
    const markup = html(<LoadingRibbon done={140} total={400} what="draws" />);
    expect(markup).toContain('aria-valuenow="140"');
    expect(markup).toContain('140 of 400 draws');
    expect(markup).toContain('width:35%');
  });
  test('the caution names what a prediction does not replace', () => {
    expect(html(<Caution />)).toContain('qualified supervision');
  });
});

describe('bench', () => {
  test('a blinded card shows its code and neither dose nor control value', () => {
    const markup = html(
      <BenchHead
        identity="V-07"
        line="run 3"
        dose="10.13"
        doseUnit="mL/h"
        control={{ value: '0.640', unit: '/d' }}
        when="day 2"
        blindCode="K4"
      />,
    );
    expect(markup).toContain('K4');
    expect(markup).not.toContain('10.13');
    expect(markup).not.toContain('0.640');
  });
  const moments = {
    zone: 'Europe/Berlin',
    what: 'the sample',
    due: '2026-12-01T13:36:00Z',
    earliest: '2026-12-01T13:26:00Z',
    latest: '2026-12-01T13:46:00Z',
    trackFrom: '2026-12-01T13:06:00Z',
    trackTo: '2026-12-01T14:06:00Z',
  };
  test('the counter tells before, after, and past the window apart', () => {
    const at = (now: string) => html(<Countdown {...moments} now={now} />);
    expect(at('2026-12-01T13:32:20Z')).toContain('03:40');
    expect(at('2026-12-01T13:32:20Z')).toContain('until the sample is due at');
    expect(at('2026-12-01T13:32:20Z')).toContain('10\u202fmin either side is on time');
    expect(at('2026-12-01T13:40:00Z')).toContain('since the sample was due at');
    expect(at('2026-12-01T13:50:00Z')).toContain('past the window of the sample');
  });
  test('only exceptions that can be recorded have a key', () => {
    const markup = html(<ExceptionKeys onLate={nothing} onSkip={nothing} onNote={nothing} />);
    expect(markup.match(/<button/g)).toHaveLength(3);
    expect(markup).not.toContain('Photo');
  });
  test('a step keeps the decimals and stays within the bounds', () => {
    const field = { id: 'v', label: 'Volume', unit: 'mL', onChange: nothing, step: 0.1 };
    expect(moved({ ...field, value: '5.0' }, 1)).toBe('5.1');
    expect(moved({ ...field, value: '5.25' }, -1)).toBe('5.15');
    expect(moved({ ...field, value: '5.5', max: 5.5 }, 1)).toBe('5.5');
    expect(moved({ ...field, value: '', min: 2 }, 1)).toBe('2.1');
    expect(moved({ ...field, value: 'abc' }, 1)).toBe('0.1');
  });
  test('the value field names its − and + keys', () => {
    const markup = html(
      <ValueField
        id="v"
        label="Volume drawn"
        unit="mL"
        value="5.0"
        onChange={nothing}
        step={0.1}
      />,
    );
    expect(markup).toContain('aria-label="Volume drawn: less"');
    expect(markup).toContain('for="v"');
  });
});
