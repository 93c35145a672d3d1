import { MarkShape } from '@/components/marks/mark-shape';
import type { PartProps } from './band-parts';
import { placeLevels } from './clusters';
import type { Dimensions } from './dimensions';
import type { Text } from './labels';
import type { Tick } from './scale';

const crisp = (at: number) => Math.round(at) + 0.5;
const inRange = (at: number, width: number) => at >= 0 && at <= width;

export function ScaleRule({ size, dim, width, ticks }: PartProps & { ticks: Tick[] }) {
  const y = dim.rule + 0.5;
  const colour = size === 'list' ? 'var(--edge)' : 'var(--ink)';
  const down = ticks
    .map((t) => `M${crisp(t.x)} ${y}v${t.major ? dim.ticks.major : dim.ticks.minor}`)
    .join('');
  const ends =
    size === 'list'
      ? ''
      : `M${dim.pad + 0.5} ${y}v${dim.ticks.major}M${width - dim.pad - 0.5} ${y}v${dim.ticks.major}`;
  return (
    <path d={`M${dim.pad} ${y}H${width - dim.pad}${down}${ends}`} stroke={colour} fill="none" />
  );
}

/** Stop line with the forbidden stretch hatched beyond it. */
export function Ceiling({ data, dim, x, width, id }: PartProps) {
  if (data.ceiling === undefined) return null;
  const at = x(data.ceiling);
  if (at < dim.pad - 1 || at > width - dim.pad + 1) return null;
  const below = data.ceilingSide === 'below';
  const [from, to] = below ? [dim.pad, at] : [at, width - dim.pad];
  const [top] = dim.zone;
  return (
    <g>
      <rect
        x={from}
        y={top}
        width={to - from}
        height={dim.rule - top}
        fill={`url(#${id}-hatch)`}
        opacity={0.28}
      />
      <path
        d={`M${at} ${top}V${dim.rule}`}
        stroke="var(--stop)"
        strokeWidth={dim.ceilingLine}
        fill="none"
      />
    </g>
  );
}

/** Hollow pointers that hang from above: what the model says. */
export function Predicted({ data, size, dim, x, width, ground }: PartProps & { ground: string }) {
  const top = size === 'page' ? 13 : 0.5;
  const [half, high] = size === 'page' ? [5.4, 9] : [3.6, 6];
  return data.onsets.map((onset) => {
    const at = crisp(x(onset.value));
    if (!inRange(at, width)) return null;
    if (size === 'list') {
      return (
        <path
          key={onset.value}
          d={`M${at} ${dim.zone[0]}V${dim.rule}`}
          stroke="var(--ink)"
          fill="none"
        />
      );
    }
    return (
      <g key={onset.value} stroke="var(--ink)">
        <path d={`M${at} ${top + high}V${dim.rule}`} strokeDasharray="2 2" fill="none" />
        <path
          d={`M${at - half} ${top}h${2 * half}l${-half} ${high}Z`}
          fill={ground}
          strokeWidth={1.2}
          strokeLinejoin="miter"
        />
      </g>
    );
  });
}

/** Solid pointers that stand up from below: what the records say. */
export function Observed({ data, size, dim, x, width }: PartProps) {
  return data.observed.map((onset) => {
    const clamp = (at: number) => Math.min(Math.max(at, dim.pad), width - dim.pad);
    const [from, at, to] = [clamp(x(onset.low)), x(onset.value), clamp(x(onset.high))];
    const key = `${onset.low} ${onset.value} ${onset.high}`;
    if (size === 'list') {
      return (
        <rect
          key={key}
          x={from}
          y={22}
          width={Math.max(to - from, 1)}
          height={2}
          fill="var(--ink)"
        />
      );
    }
    const y = dim.rule + 0.5;
    const high = size === 'page' ? 6 : 5;
    return (
      <g key={key} fill="var(--ink)">
        <rect x={from} y={y - 1.5} width={Math.max(to - from, 1)} height={3} />
        {size === 'page' ? (
          <>
            <rect x={from - 1} y={y - 4} width={2} height={8} />
            <rect x={to - 1} y={y - 4} width={2} height={8} />
          </>
        ) : null}
        {inRange(at, width) ? <path d={`M${at} ${y + 1.5}l3.6 ${high}h-7.2Z`} /> : null}
      </g>
    );
  });
}

/** Notches for planned levels, marks on a disc of the ground for runs. */
export function Levels({ data, size, dim, x, ground }: PartProps & { ground: string }) {
  const { marks, notches } = placeLevels(data.levels, x, dim, size);
  const { width: w, height: h } = dim.notch;
  const top = size === 'list' ? dim.rule + 0.5 - h / 2 : dim.rule - h;
  return (
    <>
      {notches.map((n) => (
        <rect
          key={n.key}
          x={Math.round(n.x - w / 2)}
          y={top}
          width={w}
          height={h}
          fill="var(--ink)"
        />
      ))}
      {marks.map((m) => (
        <g key={m.key}>
          <circle cx={m.x} cy={m.y} r={dim.mark / 2 + 1} fill={ground} />
          <MarkShape state={m.state} x={m.x} y={m.y} d={dim.mark} />
          {m.count === null ? null : (
            <text x={m.x + dim.mark / 2 + 3} y={m.y + 4} fontSize={11} fill="var(--ink)">
              {m.count}
            </text>
          )}
        </g>
      ))}
    </>
  );
}

/** Index pointer: the level at the bench now. */
export function Here({ data, size, dim, x, width }: PartProps) {
  if (data.here === undefined) return null;
  const at = Math.round(x(data.here));
  if (!inRange(at, width)) return null;
  const y = dim.rule + 1;
  const [half, high] = size === 'list' ? [3.5, 5] : [7, 9];
  return (
    <g fill="var(--index)">
      <rect x={at - 1} y={dim.zone[0]} width={2} height={y - dim.zone[0]} />
      <path d={`M${at} ${y}l${half} ${high}h${-2 * half}Z`} />
    </g>
  );
}

export function Texts({ texts, dim, ground }: { texts: Text[]; dim: Dimensions; ground: string }) {
  return texts.map((t) => (
    <text
      key={`${t.kind} ${t.text} ${t.x}`}
      x={t.x}
      y={t.y}
      textAnchor={t.anchor}
      fontSize={t.kind === 'numeral' ? dim.font.numeral : dim.font.label}
      fontWeight={t.kind === 'observed' ? 600 : 400}
      fill={t.kind === 'numeral' ? 'var(--ink2)' : 'var(--ink)'}
      stroke={t.kind === 'observed' ? ground : undefined}
      strokeWidth={t.kind === 'observed' ? 2 : undefined}
      paintOrder="stroke"
    >
      {t.text}
    </text>
  ));
}
