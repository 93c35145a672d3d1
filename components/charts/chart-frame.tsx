'use client';

import type { ReactNode } from 'react';
import { CartesianGrid, ComposedChart, XAxis, YAxis } from 'recharts';
import { useWidth } from '@/components/ui/use-width';
import type { Axis, AxisTick } from './axis';

/** The same inner margin as the page ribbon, so that scales join. */
export const PAD = 16;
/** Room under the baseline for ticks and numerals. */
export const FOOT = 26;

/** Where a value lies, in px of the chart; the axes are linear. */
export type Places = { x: (value: number) => number; y: (value: number) => number };

export type FrameProps = {
  /** the chart in a sentence */
  alt: string;
  xDomain: [number, number];
  xTicks: (width: number) => { value: number; major: boolean; text: string }[];
  /** name and unit, at the right end of the baseline */
  xName: string;
  y: Axis;
  /** unit, after the uppermost numeral */
  yUnit: string;
  height: number;
  initialWidth?: number;
  children: (places: Places, width: number) => ReactNode;
};

/** Chart without a box: dotted gridlines, ink baseline, numerals on the gridlines, names in place. */
export function ChartFrame(props: FrameProps) {
  const { alt, xDomain, y, height } = props;
  const [ref, width] = useWidth<HTMLDivElement>(props.initialWidth ?? 1374);
  const base = height - FOOT;
  const places: Places = {
    x: (v) => PAD + ((v - xDomain[0]) / (xDomain[1] - xDomain[0])) * (width - 2 * PAD),
    y: (v) => base - ((v - y.domain[0]) / (y.domain[1] - y.domain[0])) * base,
  };
  return (
    <div
      ref={ref}
      role="img"
      aria-label={alt}
      className="w-full min-w-0 overflow-hidden font-mono print:[&_.recharts-wrapper]:max-w-full"
      style={{ height }}
    >
      <ComposedChart
        width={width}
        height={height}
        margin={{ top: 0, right: PAD, bottom: FOOT, left: PAD }}
        accessibilityLayer={false}
        style={{ overflow: 'hidden' }}
      >
        <CartesianGrid
          vertical={false}
          horizontalValues={y.ticks.filter((t) => t.value > y.domain[0]).map((t) => t.value)}
          stroke="var(--edge)"
          strokeOpacity={0.6}
          strokeDasharray="1 3"
          syncWithTicks={false}
        />
        <XAxis type="number" dataKey="x" domain={xDomain} allowDataOverflow hide />
        <YAxis type="number" domain={y.domain} allowDataOverflow hide width={0} />
        {props.children(places, width)}
        <Baseline {...props} places={places} base={base} width={width} />
        <Numerals ticks={y.ticks} unit={props.yUnit} places={places} floor={y.domain[0]} />
      </ComposedChart>
    </div>
  );
}

type BaselineProps = FrameProps & { places: Places; base: number; width: number };

function Baseline({ xTicks, xName, places, base, width }: BaselineProps) {
  const ticks = xTicks(width);
  const nameFrom = width - PAD - xName.length * 7 - 10;
  return (
    <g>
      <path
        d={`M${PAD} ${base + 0.5}H${width - PAD}${ticks
          .map((t) => `M${Math.round(places.x(t.value)) + 0.5} ${base + 0.5}v4`)
          .join('')}`}
        stroke="var(--ink)"
        fill="none"
      />
      {ticks
        .filter((t) => t.major && places.x(t.value) + t.text.length * 3.5 < nameFrom)
        .map((t) => {
          const at = places.x(t.value);
          const first = at < PAD + 8;
          return (
            <text
              key={t.value}
              x={first ? PAD : at}
              y={base + 19}
              textAnchor={first ? 'start' : 'middle'}
              fontSize={11}
              fill="var(--ink2)"
            >
              {t.text}
            </text>
          );
        })}
      <text x={width - PAD} y={base + 19} textAnchor="end" fontSize={11} fill="var(--ink2)">
        {xName}
      </text>
    </g>
  );
}

type NumeralProps = { ticks: AxisTick[]; unit: string; places: Places; floor: number };

function Numerals({ ticks, unit, places, floor }: NumeralProps) {
  return (
    <g fontSize={11} fill="var(--ink2)" stroke="var(--plate)" strokeWidth={4} paintOrder="stroke">
      {ticks
        .filter((t) => t.value > floor && places.y(t.value) > 14)
        .map((t, i, all) => (
          <text key={t.value} x={PAD} y={places.y(t.value) - 3.5}>
            {i === all.length - 1 ? `${t.text} ${unit}`.trim() : t.text}
          </text>
        ))}
    </g>
  );
}
