'use client';

import clsx from 'clsx';
import type { ReactNode } from 'react';

export type ExceptionKeysProps = {
  onLate?: () => void;
  onSkip?: () => void;
  onNote?: () => void;
  onPhoto?: () => void;
  onLost?: () => void;
  disabled?: boolean;
};

/** Columns of the tablet's row. */
const PLACE = {
  late: 'tablet:col-start-1 desk:col-start-auto',
  skip: 'tablet:col-start-2 desk:col-start-auto',
  note: 'tablet:col-start-3 desk:col-start-auto',
  photo: 'tablet:col-start-4 desk:col-start-auto',
  lost: 'tablet:col-start-4 desk:col-start-auto',
} as const;

const stroke = { fill: 'none', stroke: 'currentColor', strokeWidth: 2 };

const GLYPHS: Record<'late' | 'skip' | 'note' | 'photo' | 'lost', ReactNode> = {
  late: (
    <g {...stroke}>
      <circle cx={10} cy={10} r={9} />
      <path d="M10 4.5V10.5L13.5 13" />
    </g>
  ),
  skip: <path {...stroke} strokeDasharray="3.5 2" d="M0 11H5C7 11 7 6 9.5 6S12 11 14 11H19" />,
  note: <path {...stroke} d="M2 3H18M2 10H18M2 17H12" />,
  photo: (
    <g {...stroke}>
      <path d="M1 4.5H6L7.5 2H12.5L14 4.5H19V17H1Z" />
      <circle cx={10} cy={10.5} r={3.5} />
    </g>
  ),
  lost: <path d="M7 0H13V7.5H7ZM7 12.5H13V20H7Z" fill="currentColor" />,
};

/**
 * Exceptions, one at a time; only those that can be recorded here are shown, each always in its own
 * place, so that a hand finds it without looking.
 */
export function ExceptionKeys(props: ExceptionKeysProps) {
  const keys = [
    { name: 'late' as const, word: 'Took it late', act: props.onLate },
    { name: 'skip' as const, word: 'Skip', act: props.onSkip },
    { name: 'note' as const, word: 'Note', act: props.onNote },
    { name: 'photo' as const, word: 'Photo', act: props.onPhoto },
    { name: 'lost' as const, word: 'Lost', rest: ' preparation', act: props.onLost },
  ].filter((k) => k.act !== undefined);
  if (keys.length === 0) return null;
  return (
    <div className="grid grid-cols-2 gap-4 tablet:grid-cols-4 desk:grid-cols-2">
      {keys.map((k) => (
        <button
          key={k.name}
          type="button"
          onClick={k.act}
          disabled={props.disabled}
          className={clsx(
            'press flex h-[72px] items-center justify-center gap-3.5 rounded-key border-[1.5px] border-edge bg-plate px-2 text-bench-key leading-6 font-semibold hover:border-ink hover:bg-well disabled:border-dashed disabled:text-ink2',
            PLACE[k.name],
          )}
        >
          <svg width={20} height={20} viewBox="0 0 20 20" aria-hidden="true" className="shrink-0">
            {GLYPHS[k.name]}
          </svg>
          <span>
            {k.word}
            {'rest' in k ? <span className="sr-only">{k.rest}</span> : null}
          </span>
        </button>
      ))}
    </div>
  );
}
