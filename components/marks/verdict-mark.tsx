import { MarkShape } from './mark-shape';
import type { MarkState } from './states';

type MarkProps = {
  state: MarkState;
  /** size d, px */
  size?: number;
  /** the mark speaks for itself when no word stands beside it */
  alone?: boolean;
};

/** A mark on its own; hidden from readers of the page unless it stands alone. */
export function VerdictMark({ state, size = 12, alone = false }: MarkProps) {
  const box = Math.ceil(size * 1.3);
  const c = box / 2;
  const shape = <MarkShape state={state} x={c} y={c} d={size} />;
  const frame = { width: box, height: box, viewBox: `0 0 ${box} ${box}`, className: 'shrink-0' };
  return alone ? (
    <svg {...frame} role="img" aria-label={state}>
      {shape}
    </svg>
  ) : (
    <svg {...frame} aria-hidden="true">
      {shape}
    </svg>
  );
}

/** The mark with its word beside it. */
export function VerdictLabel({ state, size = 12 }: { state: MarkState; size?: number }) {
  return (
    <span className="inline-flex items-center align-middle gap-2 whitespace-nowrap">
      <VerdictMark state={state} size={size} />
      {state}
    </span>
  );
}
