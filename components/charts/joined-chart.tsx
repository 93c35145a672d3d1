'use client';

import { ticksOf } from '@/components/ribbon/scale';
import { figure, unitText } from '@/lib/format';
import { axisFromZero, axisName } from './axis';
import { ChartFrame, FOOT, PAD, type Places } from './chart-frame';
import {
  Brackets,
  Name,
  type Observation,
  ObservationMarks,
  OnsetLines,
  PredictionLines,
  placeObservations,
  predictionPieces,
} from './layers';
import { placeCurveName } from './place-names';

export type JoinedChartProps = {
  /** range of the control axis, the ribbon's own */
  from: number;
  to: number;
  unit: string;
  /** name of the control parameter */
  label: string;
  /** UCUM code of the amplitude */
  amplitudeUnit: string;
  /** predicted amplitude along the control axis; null where there is none */
  predicted?: { control: number[]; amplitude: (number | null)[]; stable?: boolean[] };
  /** measure = amplitude of the record */
  observations: Observation[];
  /** predicted onsets, whose hairlines run through */
  onsets: number[];
  /** observed brackets */
  observed: { low: number; high: number }[];
  height?: number;
  /** px before the container has been measured */
  width?: number;
};

/** Below this width the curve goes without its name, px. */
const NAME_FROM = 600;

/** Amplitude against the control parameter, joined beneath the page ribbon on the same scale. */
export function JoinedChart(props: JoinedChartProps) {
  const { from, to, height = 232, observations, predicted } = props;
  const y = axisFromZero(largest(props));
  const base = height - FOOT;
  const pieces = predicted
    ? predictionPieces(predicted.control, predicted.amplitude, predicted.stable)
    : [];
  return (
    <ChartFrame
      alt={sentence(props)}
      xDomain={[from, to]}
      xTicks={(width) => chartTicks(from, to, width)}
      xName={axisName(props.label, props.unit)}
      y={y}
      yUnit={unitText(props.amplitudeUnit)}
      height={height}
      initialWidth={props.width}
    >
      {(places, width) => (
        <>
          <Brackets brackets={props.observed} places={places} base={base} />
          <PredictionLines pieces={pieces} />
          <OnsetLines values={props.onsets} places={places} base={base} />
          {pieces.length > 0 && width >= NAME_FROM ? (
            <CurveName {...props} pieces={pieces} places={places} base={base} width={width} />
          ) : null}
          <ObservationMarks observations={observations} places={places} base={base} width={width} />
        </>
      )}
    </ChartFrame>
  );
}

/** Half the ribbon's major step between ticks, numerals at the ribbon's own. */
function chartTicks(from: number, to: number, width: number) {
  const all = ticksOf(from, to, width, PAD);
  const majors = all.map((t, i) => (t.major ? i : -1)).filter((i) => i >= 0);
  const gap = majors.length > 1 ? majors[1]! - majors[0]! : 2;
  const offset = majors[0] ?? 0;
  return gap % 2 === 0 ? all.filter((_, i) => (i - offset) % (gap / 2) === 0) : all;
}

const CURVE_NAME = 'predicted amplitude';

type CurveNameProps = Pick<JoinedChartProps, 'onsets' | 'observed' | 'observations'> & {
  pieces: ReturnType<typeof predictionPieces>;
  places: Places;
  base: number;
  width: number;
};

/** The curve's name beside the first onset, clear of curve, hairlines, brackets' edges and marks. */
function CurveName({
  onsets,
  observed,
  observations,
  pieces,
  places,
  base,
  width,
}: CurveNameProps) {
  const upright = (value: number) => {
    const x = places.x(value);
    return { left: x, right: x + 1, top: 0, bottom: base };
  };
  const marks = placeObservations(observations).map(({ control, shift, measure, label }) => {
    const x = places.x(control) + shift;
    const room = label ? 24 + label.length * 7 : 10;
    return {
      left: x - room,
      right: x + room,
      top: places.y(measure.high),
      bottom: places.y(measure.low),
    };
  });
  const taken = [...onsets, ...observed.flatMap((o) => [o.low, o.high])].map(upright);
  const curve = pieces.flatMap((piece) =>
    piece.points.map((p) => ({ x: places.x(p.x), y: places.y(p.y) })),
  );
  const from = onsets.length > 0 ? places.x(Math.min(...onsets)) + 16 : PAD + 56;
  const at = placeCurveName(CURVE_NAME, curve, [...taken, ...marks], { from, width, base });
  return at ? (
    <Name x={at.x} y={at.y}>
      {CURVE_NAME}
    </Name>
  ) : null;
}

function largest({ predicted, observations }: JoinedChartProps): number {
  const values = [
    ...(predicted?.amplitude ?? []),
    ...observations.map((o) => o.measure?.high ?? null),
  ].filter((v): v is number => v !== null && Number.isFinite(v));
  return Math.max(0, ...values);
}

function sentence(props: JoinedChartProps): string {
  const unit = unitText(props.amplitudeUnit);
  const top = Math.max(0, ...(props.predicted?.amplitude ?? []).map((v) => v ?? 0));
  const expected = props.predicted ? `Predicted amplitude up to ${figure(top)} ${unit}.` : '';
  const seen = props.observations.map((o) =>
    o.measure
      ? `${o.state} at ${figure(o.control)} ${unitText(props.unit)}, amplitude ${figure(o.measure.value)} ${unit}`
      : `${o.state} at ${figure(o.control)} ${unitText(props.unit)}`,
  );
  return `Amplitude against ${props.label}. ${expected} ${
    seen.length > 0 ? `Observed: ${seen.join('; ')}.` : 'Nothing observed yet.'
  }`.replaceAll('  ', ' ');
}
