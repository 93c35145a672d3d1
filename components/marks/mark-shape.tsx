import { MARK_COLOUR, type MarkState } from './states';

type Props = {
  state: MarkState;
  /** centre, px */
  x: number;
  y: number;
  /** size d, px */
  d: number;
};

/** One mark as SVG shapes about its centre; every measure is a share of d. */
export function MarkShape({ state, x, y, d }: Props) {
  const colour = MARK_COLOUR[state];
  switch (state) {
    case 'steady':
      return <rect x={x - d / 2} y={y - 0.19 * d} width={d} height={0.38 * d} fill={colour} />;
    case 'damped':
      return <Bars x={x} y={y} d={d} colour={colour} />;
    case 'sustained':
      return <Ring x={x} y={y} d={d} colour={colour} />;
    case 'undecided':
      return <Lozenge x={x} y={y} d={d} colour={colour} />;
    case 'stopped':
      return <Cross x={x} y={y} d={d} colour={colour} />;
    case 'lost':
      return (
        <g fill={colour}>
          <rect x={x - 0.14 * d} y={y - 0.5 * d} width={0.28 * d} height={0.36 * d} />
          <rect x={x - 0.14 * d} y={y + 0.14 * d} width={0.28 * d} height={0.36 * d} />
        </g>
      );
  }
}

type Part = { x: number; y: number; d: number; colour: string };

function Bars({ x, y, d, colour }: Part) {
  return (
    <g fill={colour}>
      {[1, 0.62, 0.28].map((height, i) => (
        <rect
          key={height}
          x={x - d / 2 + i * 0.38 * d}
          y={y - (height * d) / 2}
          width={0.24 * d}
          height={height * d}
        />
      ))}
    </g>
  );
}

function Ring({ x, y, d, colour }: Part) {
  if (d < 9) return <circle cx={x} cy={y} r={d / 2} fill={colour} />;
  return (
    <>
      <circle cx={x} cy={y} r={0.43 * d} fill="none" stroke={colour} strokeWidth={0.14 * d} />
      <circle cx={x} cy={y} r={0.25 * d} fill={colour} />
    </>
  );
}

/** Dashes sit on the four corners and on the middle of each side: period half a side. */
function Lozenge({ x, y, d, colour }: Part) {
  const h = 0.56 * d;
  const side = h * Math.SQRT2;
  return (
    <path
      d={`M${x} ${y - h}L${x + h} ${y}L${x} ${y + h}L${x - h} ${y}Z`}
      fill="none"
      stroke={colour}
      strokeWidth={Math.max(1, 0.12 * d)}
      strokeDasharray={`${0.3 * side} ${0.2 * side}`}
      strokeDashoffset={0.15 * side}
    />
  );
}

function Cross({ x, y, d, colour }: Part) {
  const a = 0.43 * d;
  return (
    <path
      d={`M${x - a} ${y - a}L${x + a} ${y + a}M${x - a} ${y + a}L${x + a} ${y - a}`}
      stroke={colour}
      strokeWidth={0.24 * d}
    />
  );
}
