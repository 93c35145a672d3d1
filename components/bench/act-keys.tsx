'use client';

import { useId } from 'react';
import { MarkShape } from '@/components/marks/mark-shape';

/** Stop, in a hatched guard of 16 px that does not press. */
export function StopKey(props: { onStop: () => void; pending?: boolean; label?: string }) {
  const id = useId().replace(/[^A-Za-z0-9_-]/g, '');
  return (
    <div className="relative h-[112px] w-[216px] shrink-0 p-4 tablet:h-40">
      <svg className="absolute inset-0 h-full w-full" aria-hidden="true">
        <defs>
          <pattern
            id={id}
            width={10}
            height={10}
            patternUnits="userSpaceOnUse"
            patternTransform="rotate(45)"
          >
            <path d="M5 0V10" stroke="var(--stop)" strokeOpacity={0.5} strokeWidth={4} />
          </pattern>
        </defs>
        <rect width="100%" height="100%" rx={2} fill={`url(#${id})`} />
      </svg>
      <span className="pointer-events-none absolute inset-0 rounded-key border-2 border-stop opacity-75" />
      <button
        type="button"
        onClick={props.onStop}
        disabled={props.pending}
        aria-busy={props.pending || undefined}
        className="press relative flex h-full w-full items-center gap-2.5 rounded-key border-[3px] border-stop bg-plate px-[23px] text-[30px] leading-9 font-bold text-stop hover:bg-[color-mix(in_srgb,var(--stop)_10%,var(--plate))]"
      >
        <svg width={36} height={36} viewBox="0 0 36 36" aria-hidden="true" className="shrink-0">
          <MarkShape state="stopped" x={18} y={18} d={29} />
        </svg>
        {props.label ?? 'Stop'}
      </button>
    </div>
  );
}

/** The one index key, named for the act. */
export function ActKey(props: {
  children: string;
  onPress: () => void;
  pending?: boolean;
  disabled?: boolean;
}) {
  return (
    <button
      type="button"
      onClick={props.onPress}
      disabled={props.disabled || props.pending}
      aria-busy={props.pending || undefined}
      className="press flex h-[112px] w-full items-center justify-center rounded-key bg-index px-6 text-instruction font-bold text-on-index hover:bg-[color-mix(in_srgb,var(--index)_88%,var(--ink))] disabled:border-2 disabled:border-dashed disabled:border-edge disabled:bg-transparent disabled:text-ink2 tablet:h-40 tablet:max-w-[444px]"
    >
      {props.children}
    </button>
  );
}
