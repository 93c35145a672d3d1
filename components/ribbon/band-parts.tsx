import { bandStops, combValues, lineStops } from './band';
import type { Dimensions } from './dimensions';
import type { RibbonData, RibbonSize } from './types';
import type { WavePath } from './wave';

export type PartProps = {
  data: RibbonData;
  size: RibbonSize;
  dim: Dimensions;
  x: (value: number) => number;
  width: number;
  /** prefix of ids inside this drawing */
  id: string;
};

const STALE = 0.4;
const crisp = (at: number) => Math.round(at) + 0.5;

export function Hatch({ id }: { id: string }) {
  return (
    <defs>
      <pattern
        id={id}
        width={6}
        height={6}
        patternUnits="userSpaceOnUse"
        patternTransform="rotate(45)"
      >
        <path d="M3 0V6" stroke="var(--stop)" strokeWidth={1.5} />
      </pattern>
    </defs>
  );
}

export function Envelopes({ paths }: { paths: string[] }) {
  return paths.map((d) => <path key={d} d={d} fill="var(--sustained)" fillOpacity={0.11} />);
}

/** Where the onset may lie: a soft band, and on card and page the comb of quantiles over it. */
export function BandAndComb({ data, size, dim, x, width, id }: PartProps) {
  const [top, bottom] = dim.zone;
  const weight = size === 'list' ? 1 : 0.55;
  const fade = data.stale ? STALE : 1;
  const inside = (at: number) => at >= dim.pad && at <= width - dim.pad;
  return data.onsets.map((onset, i) => {
    const [from, to] = [x(onset.low), x(onset.high)];
    const [left, right] = [Math.max(from, dim.pad), Math.min(to, width - dim.pad)];
    const key = `${id}-band-${i}`;
    const comb = size === 'list' ? [] : combValues(onset, size === 'page' ? 'all' : 9);
    const lines = comb.map(x).filter(inside);
    return (
      <g key={key} opacity={fade}>
        <linearGradient id={key} gradientUnits="userSpaceOnUse" x1={from} x2={to} y1={0} y2={0}>
          {bandStops(onset).map((stop) => (
            <stop
              key={`${stop.place}`}
              offset={to > from ? (x(stop.value) - from) / (to - from) : 0}
              stopColor="var(--ink)"
              stopOpacity={stop.opacity * weight}
            />
          ))}
        </linearGradient>
        <rect
          x={left}
          y={top}
          width={Math.max(right - left, 0)}
          height={bottom - top}
          fill={`url(#${key})`}
        />
        <path
          d={lines.map((at) => `M${crisp(at)} ${top}V${bottom}`).join('')}
          stroke="var(--ink)"
          strokeOpacity={0.26}
        />
      </g>
    );
  });
}

/** The line itself; through a coexistence window the steady line goes on with the wave behind it. */
export function Wave({ data, dim, x, width, id, wave }: PartProps & { wave: WavePath }) {
  const key = `${id}-line`;
  const stops = lineStops(data.onsets);
  const share = (value: number) => Math.min(1, Math.max(0, x(value) / width));
  const colour = stops.length > 0 ? `url(#${key})` : 'var(--steady)';
  return (
    <g fill="none" opacity={data.stale ? STALE : 1} strokeLinejoin="round">
      <linearGradient id={key} gradientUnits="userSpaceOnUse" x1={0} x2={width} y1={0} y2={0}>
        {stops.map((stop) => (
          <stop key={stop.key} offset={share(stop.value)} stopColor={`var(--${stop.token})`} />
        ))}
      </linearGradient>
      {wave.behind.map((d) => (
        <path key={d} d={d} stroke="var(--sustained)" strokeWidth={1} strokeOpacity={0.75} />
      ))}
      <path d={wave.line} stroke={colour} strokeWidth={dim.line} />
    </g>
  );
}
