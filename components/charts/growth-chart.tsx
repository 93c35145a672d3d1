'use client';

import { ticksOf } from '@/components/ribbon/scale';
import { figure, unitText } from '@/lib/format';
import { axisName, axisOver } from './axis';
import { ChartFrame, FOOT, PAD } from './chart-frame';
import {
  Name,
  type Observation,
  ObservationMarks,
  OnsetLines,
  PredictionLines,
  predictionPieces,
} from './layers';

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
          <Name x={width - PAD} y={places.y(0) - 6} end>
            grows
          </Name>
          <Name x={width - PAD} y={places.y(0) + 16} end>
            dies away
          </Name>
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

function sentence(props: GrowthChartProps): string {
  const unit = unitText(props.unit);
  const crossings = props.onsets.map((v) => `${figure(v)} ${unit}`).join(' and ');
  return `Growth rate of the leading root against ${props.label}; ${
    crossings ? `it crosses zero at ${crossings}` : 'no onset in this range'
  }.`;
}
