import type { ReactElement } from 'react';
import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, test } from 'vitest';
import { GrowthChart, JoinedChart, JoinedPlate, RecordChart } from '@/components/charts';

const html = (element: ReactElement) => renderToStaticMarkup(element);
const axis = { from: 0, to: 1.3, unit: '/d', label: 'dilution rate' };

describe('charts', () => {
  test('the joined chart says what was predicted and what was observed', () => {
    const markup = html(
      <JoinedChart
        {...axis}
        amplitudeUnit="umol/L"
        predicted={{ control: [0, 0.5, 1], amplitude: [null, 35, 20] }}
        observations={[
          { control: 0.64, state: 'sustained', measure: { value: 24, low: 20, high: 28 } },
          { control: 0.3, state: 'steady', measure: null },
        ]}
        onsets={[0.151]}
        observed={[{ low: 0.32, high: 0.64 }]}
      />,
    );
    expect(markup).toContain('role="img"');
    expect(markup).toContain('Predicted amplitude up to 35 \u00b5mol/L.');
    expect(markup).toContain('sustained at 0.64 /d, amplitude 24 \u00b5mol/L');
    expect(markup).not.toMatch(/NaN|Infinity/);
  });
  test('without prediction and observations it still stands, and says so', () => {
    const markup = html(
      <JoinedChart {...axis} amplitudeUnit="umol/L" observations={[]} onsets={[]} observed={[]} />,
    );
    expect(markup).toContain('Nothing observed yet.');
    expect(markup).not.toMatch(/NaN|Infinity/);
  });
  test('ribbon and chart of one plate share their range and unit', () => {
    const markup = html(
      <JoinedPlate
        {...axis}
        onsets={[]}
        observed={[]}
        levels={[]}
        chart={{ amplitudeUnit: 'umol/L', observations: [] }}
      />,
    );
    expect(markup.match(/Dilution rate from 0 to 1.3/g)).toHaveLength(2);
    expect(markup).toContain('Amplitude against dilution rate.');
  });
  test('the growth chart names where the rate crosses zero', () => {
    const markup = html(
      <GrowthChart
        {...axis}
        timeUnit="d"
        branch={{ control: [0, 0.5, 1], growthRate: [-1, 0, 1], stable: [true, true, false] }}
        onsets={[0.5]}
      />,
    );
    expect(markup).toContain('it crosses zero at 0.5 /d');
  });
  test('a record with gaps counts the readings it has; an empty one draws nothing broken', () => {
    const common = { timeUnit: 'd', unit: 'umol/L', label: 'chlorophyll' };
    const markup = html(
      <RecordChart {...common} times={[0, 1, 2]} values={[4, null, 6]} state="undecided" />,
    );
    expect(markup).toContain('chlorophyll: 2 readings from 4 to 6 \u00b5mol/L, verdict undecided.');
    const empty = html(<RecordChart {...common} times={[]} values={[]} />);
    expect(empty).toContain('0 readings');
    expect(empty).not.toMatch(/NaN|Infinity/);
  });
});
