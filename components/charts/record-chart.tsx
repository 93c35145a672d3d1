'use client';

import { Line } from 'recharts';
import { MARK_COLOUR, type MarkState } from '@/components/marks/states';
import { ticksOf } from '@/components/ribbon/scale';
import { figure, unitText } from '@/lib/format';
import { axisOver } from './axis';
import { ChartFrame, FOOT, PAD, type Places } from './chart-frame';
import { Name } from './layers';

export type RecordChartProps = {
  /** hours, days … since the level was set */
  times: number[];
  /** null = missing */
  values: (number | null)[];
  /** UCUM codes */
  timeUnit: string;
  unit: string;
  /** name of the readout */
  label: string;
  /** the fitted course */
  fit?: { times: number[]; values: number[] };
  /** the valid window; readings outside it are pale */
  from?: number;
  until?: number;
  /** verdict, which colours the readings */
  state?: MarkState;
  height?: number;
  width?: number;
};

/** One run's readings against the time since its level was set, with the fit over them. */
export function RecordChart(props: RecordChartProps) {
  const { times, values, fit, height = 200 } = props;
  const finite = times.filter(Number.isFinite);
  const low = Math.min(0, ...finite);
  const high = Math.max(...finite, low + 1e-9);
  const y = axisOver(
    [...values.filter((v): v is number => v !== null), ...(fit?.values ?? [])],
    false,
  );
  const base = height - FOOT;
  const line = fit ? fit.times.map((x, i) => ({ x, y: fit.values[i]! })) : [];
  return (
    <ChartFrame
      alt={sentence(props)}
      xDomain={[low, high]}
      xTicks={(width) => ticksOf(low, high, width, PAD)}
      xName={`time since dose, ${unitText(props.timeUnit)}`}
      y={y}
      yUnit={unitText(props.unit)}
      height={height}
      initialWidth={props.width ?? 640}
    >
      {(places, width) => (
        <>
          <Outside {...props} places={places} base={base} width={width} />
          {line.length > 1 ? (
            <Line
              data={line}
              dataKey="y"
              type="linear"
              stroke="var(--ink2)"
              strokeWidth={1.5}
              dot={false}
              activeDot={false}
              isAnimationActive={false}
            />
          ) : null}
          <Readings {...props} places={places} />
          <Name x={width - PAD} y={14} end>
            {props.label}
          </Name>
        </>
      )}
    </ChartFrame>
  );
}

type LayerProps = RecordChartProps & { places: Places };

const within = (t: number, { from, until }: RecordChartProps) =>
  (from === undefined || t >= from) && (until === undefined || t <= until);

function Readings(props: LayerProps) {
  const { times, values, places, state } = props;
  const colour = state ? MARK_COLOUR[state] : 'var(--ink)';
  const r = times.length > 400 ? 1.2 : 2.4;
  return (
    <g fill={colour}>
      {times.map((t, i) => {
        const value = values[i];
        if (value == null || !Number.isFinite(value)) return null;
        return (
          <circle
            key={`${t} ${value}`}
            cx={places.x(t)}
            cy={places.y(value)}
            r={r}
            opacity={within(t, props) ? 1 : 0.4}
          />
        );
      })}
    </g>
  );
}

/** Settling and what came after the valid window lie on a shade of ink. */
function Outside(props: LayerProps & { base: number; width: number }) {
  const { from, until, places, base, width } = props;
  const shade = { y: 0, height: base, fill: 'var(--ink)', fillOpacity: 0.055 };
  return (
    <>
      {from !== undefined && places.x(from) > PAD ? (
        <rect x={PAD} width={places.x(from) - PAD} {...shade} />
      ) : null}
      {until !== undefined && places.x(until) < width - PAD ? (
        <rect x={places.x(until)} width={width - PAD - places.x(until)} {...shade} />
      ) : null}
    </>
  );
}

function sentence(props: RecordChartProps): string {
  const present = props.values.filter((v): v is number => v !== null && Number.isFinite(v));
  const unit = unitText(props.unit);
  const range =
    present.length > 0
      ? `from ${figure(Math.min(...present))} to ${figure(Math.max(...present))} ${unit}`
      : 'without a value';
  const verdict = props.state ? `, verdict ${props.state}` : '';
  return `${props.label}: ${present.length} readings ${range}${verdict}.`;
}
