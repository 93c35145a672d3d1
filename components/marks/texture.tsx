import { useId } from 'react';
import { MARK_COLOUR, type MarkState } from './states';

type PatternProps = { id: string; state: MarkState };

/** The area texture of a state as an SVG pattern, to be placed in <defs>. */
export function TexturePattern({ id, state }: PatternProps) {
  const colour = MARK_COLOUR[state];
  const frame = { id, patternUnits: 'userSpaceOnUse' as const };
  switch (state) {
    case 'steady':
      return (
        <pattern {...frame} width={5} height={5}>
          <path d="M0 2.5H5" stroke={colour} strokeWidth={1.2} />
        </pattern>
      );
    case 'damped':
      return (
        <pattern {...frame} width={24} height={8}>
          <path d="M1 0V8M5 0V8M11 0V8M19 0V8" stroke={colour} strokeWidth={1.2} />
        </pattern>
      );
    case 'sustained':
      return (
        <pattern {...frame} width={16} height={6}>
          <path
            d="M0 3C2.9 0.4 5.1 0.4 8 3S13.1 5.6 16 3"
            fill="none"
            stroke={colour}
            strokeWidth={1.1}
          />
        </pattern>
      );
    case 'undecided':
      return (
        <pattern {...frame} width={6} height={6}>
          <circle cx={1.5} cy={1.5} r={0.9} fill={colour} />
          <circle cx={4.5} cy={4.5} r={0.9} fill={colour} />
        </pattern>
      );
    case 'stopped':
      return (
        <pattern {...frame} width={7} height={7} patternTransform="rotate(45)">
          <path d="M0 3.5H7M3.5 0V7" stroke={colour} strokeWidth={1.1} />
        </pattern>
      );
    case 'lost':
      return <pattern {...frame} width={8} height={8} />;
  }
}

/**
 * A strip in the texture of a state, filling its container: the 20 px edge of a calendar block, say.
 * Text never lies on it.
 */
export function TextureStrip({ state, className = '' }: { state: MarkState; className?: string }) {
  const id = useId();
  const colour = MARK_COLOUR[state];
  const hollow = state === 'undecided';
  return (
    <svg className={`block h-full w-full ${className}`} aria-hidden="true">
      <defs>
        <TexturePattern id={id} state={state} />
      </defs>
      <rect width="100%" height="100%" fill={`url(#${id})`} />
      {hollow ? null : <rect width={3} height="100%" fill={colour} />}
      <rect
        x={0.5}
        y={0.5}
        style={{ width: 'calc(100% - 1px)', height: 'calc(100% - 1px)' }}
        fill="none"
        stroke={colour}
        strokeDasharray={hollow ? '3 2' : undefined}
      />
    </svg>
  );
}
