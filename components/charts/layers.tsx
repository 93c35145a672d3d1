'use client';

import { Line } from 'recharts';
import { MarkShape } from '@/components/marks/mark-shape';
import { MARK_COLOUR, type MarkState } from '@/components/marks/states';
import type { Interval } from '@/lib/contracts';
import { dodge, piecesByStability } from './axis';
import type { Places } from './chart-frame';
import { placeNames } from './place-names';

const crisp = (at: number) => Math.round(at) + 0.5;

/** Hairlines of the predicted onsets, running through ribbon and chart. */
export function OnsetLines(props: { values: number[]; places: Places; base: number }) {
  return props.values.map((value) => (
    <path
      key={value}
      d={`M${crisp(props.places.x(value))} 0V${props.base}`}
      stroke="var(--ink)"
      strokeDasharray="2 2"
      fill="none"
    />
  ));
}

/** Observed brackets: ink 5.5 %, with their edges. */
export function Brackets(props: {
  brackets: { low: number; high: number }[];
  places: Places;
  base: number;
}) {
  return props.brackets.map(({ low, high }) => {
    const [from, to] = [props.places.x(low), props.places.x(high)];
    return (
      <g key={`${low} ${high}`}>
        <rect
          x={from}
          y={0}
          width={Math.max(to - from, 1)}
          height={props.base}
          fill="var(--ink)"
          fillOpacity={0.055}
        />
        <path
          d={`M${crisp(from)} 0V${props.base}M${crisp(to)} 0V${props.base}`}
          stroke="var(--ink)"
          strokeOpacity={0.6}
          fill="none"
        />
      </g>
    );
  });
}

/** Pieces of a prediction: 1.5 px of the second ink, dotted where it is unstable. */
export function predictionPieces(
  x: readonly number[],
  y: readonly (number | null)[],
  stable?: readonly boolean[],
) {
  return piecesByStability(x, y, stable).filter((piece) => piece.points.length > 1);
}

/** The pieces as lines of the chart. */
export function PredictionLines({ pieces }: { pieces: ReturnType<typeof predictionPieces> }) {
  return pieces.map((piece) => (
    <Line
      key={`${piece.points[0]!.x} ${piece.points[0]!.y} ${piece.stable}`}
      data={piece.points}
      dataKey="y"
      type="linear"
      stroke="var(--ink2)"
      strokeWidth={1.5}
      strokeDasharray={piece.stable ? undefined : '1.5 3'}
      dot={false}
      activeDot={false}
      isAnimationActive={false}
    />
  ));
}

export type Observation = {
  id?: string;
  control: number;
  state: MarkState;
  /** 90 % interval; null where the record gave none */
  measure: Interval | null;
  /** written beside the mark */
  label?: string;
};

type Placed = Observation & { measure: Interval; shift: number; key: string };

/** Observations with a measure; those of one control value stand apart. */
export function placeObservations(observations: readonly Observation[]): Placed[] {
  const shown = observations.filter(
    (o): o is Observation & { measure: Interval } => o.measure !== null,
  );
  const same = (o: Observation) => shown.filter((other) => other.control === o.control);
  return shown.map((o, i) => {
    const peers = same(o);
    return { ...o, shift: dodge(peers.indexOf(o), peers.length), key: o.id ?? `o${i}` };
  });
}

type MarksProps = {
  observations: readonly Observation[];
  places: Places;
  base: number;
  width: number;
  d?: number;
};

/** Observations as marks on a disc of the ground, with 90 % whiskers, names in place. */
export function ObservationMarks({ observations, places, base, width, d = 12 }: MarksProps) {
  const floor = (at: number) => Math.min(Math.max(at, 0), base);
  const placed = placeObservations(observations).map((o) => ({
    ...o,
    x: places.x(o.control) + o.shift,
    y: floor(places.y(o.measure.value)),
  }));
  const names = placeNames(placed, width, base);
  return placed.map((o, i) => {
    const name = names[i];
    const whisker = `M${o.x} ${floor(places.y(o.measure.high))}V${floor(places.y(o.measure.low))}`;
    return (
      <g key={o.key}>
        <path d={whisker} stroke={MARK_COLOUR[o.state]} strokeWidth={1.5} fill="none" />
        <circle cx={o.x} cy={o.y} r={d / 2 + 1.5} fill="var(--plate)" />
        <MarkShape state={o.state} x={o.x} y={o.y} d={d} />
        {o.label && name ? (
          <Name x={name.x} y={name.y} end={name.end} strong>
            {o.label}
          </Name>
        ) : null}
      </g>
    );
  });
}

/** A name written in the chart, 13 px. */
export function Name(props: {
  x: number;
  y: number;
  end?: boolean;
  strong?: boolean;
  children: string;
}) {
  return (
    <text
      x={props.x}
      y={props.y}
      textAnchor={props.end ? 'end' : 'start'}
      fontSize={13}
      fill={props.strong ? 'var(--ink)' : 'var(--ink2)'}
      stroke="var(--plate)"
      strokeWidth={3}
      paintOrder="stroke"
      className="font-sans"
    >
      {props.children}
    </text>
  );
}
