'use client';

import { ticksOf } from '@/components/ribbon/scale';
import { figure, unitText } from '@/lib/format';
import { axisName, axisOver } from './axis';
import { ChartFrame, FOOT, PAD, type Places } from './chart-frame';
import {
  Name,
  type Observation,
  ObservationMarks,
  OnsetLines,
  PredictionLines,
  predictionPieces,
} from './layers';
import { placeAtRight } from './place-names';

export type GrowthChartProps = {
  from: number;
  to: number;
  unit: string;
  label: string;
  /** UCUM code of model time; rates are per this unit */
  timeUnit: string;
  /** real part of the leading root along the branch, per time unit */
  branch: { control: number[]; growthRate: number[]; stable?: boolean[] };
  onsets: number[];
  /** measure = growth rate judged from a record */
  observations?: Observation[];
  height?: number;
  width?: number;
};

/** Growth rate of the leading root against the control parameter: the onset is where it is zero. */
export function GrowthChart(props: GrowthChartProps) {
  const { from, to, branch, observations = [], height = 232 } = props;
  const inside = branch.growthRate.filter((_, i) => {
    const at = branch.control[i]!;
    return at >= from && at <= to;
  });
  const marks = observations.flatMap((o) => (o.measure ? [o.measure.low, o.measure.high] : []));
  const y = axisOver([...inside, ...marks], true);
  const base = height - FOOT;
  const pieces = predictionPieces(branch.control, branch.growthRate, branch.stable);
  return (
    <ChartFrame
      alt={sentence(props)}
      xDomain={[from, to]}
      xTicks={(width) => ticksOf(from, to, width, PAD)}
      xName={axisName(props.label, props.unit)}
      y={y}
      yUnit={`/${unitText(props.timeUnit)}`}
      height={height}
      initialWidth={props.width}
    >
      {(places, width) => (
        <>
          <path
            d={`M${PAD} ${Math.round(places.y(0)) + 0.5}H${width - PAD}`}
            stroke="var(--ink)"
            fill="none"
          />
          <PredictionLines pieces={pieces} />
          <OnsetLines values={props.onsets} places={places} base={base} />
          <SideNames {...props} pieces={pieces} places={places} base={base} width={width} />
          <ObservationMarks
            observations={observations}
            places={places}
            base={base}
            width={width}
            d={9}
          />
        </>
      )}
    </ChartFrame>
  );
}

type SideNamesProps = Pick<GrowthChartProps, 'onsets' | 'observations'> & {
  pieces: ReturnType<typeof predictionPieces>;
  places: Places;
  base: number;
  width: number;
};

/** What a rate above and below zero means, written beside the zero line clear of curve and marks. */
function SideNames({ onsets, observations = [], pieces, places, base, width }: SideNamesProps) {
  const curve = pieces.flatMap((piece) =>
    piece.points.map((p) => ({ x: places.x(p.x), y: places.y(p.y) })),
  );
  const upright = (value: number, top: number, bottom: number) => {
    const x = places.x(value);
    return { left: x - 1, right: x + 1, top, bottom };
  };
  const taken = [
    ...onsets.map((value) => upright(value, 0, base)),
    ...observations.flatMap(({ control, measure }) =>
      measure ? [upright(control, places.y(measure.high), places.y(measure.low))] : [],
    ),
  ];
  const names = [
    { text: 'grows', y: places.y(0) - 8 },
    { text: 'dies away', y: places.y(0) + 18 },
  ];
  return names.map(({ text, y }) => {
    const x = placeAtRight(text, y, curve, taken, width - PAD);
    return x === null ? null : (
      <Name key={text} x={x} y={y} end>
        {text}
      </Name>
    );
  });
}

function sentence(props: GrowthChartProps): string {
  const unit = unitText(props.unit);
  const crossings = props.onsets.map((v) => `${figure(v)} ${unit}`).join(' and ');
  return `Growth rate of the leading root against ${props.label}; ${
    crossings ? `it crosses zero at ${crossings}` : 'no onset in this range'
  }.`;
}
