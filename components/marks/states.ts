/** What a mark can say about a run. */
export type MarkState = 'steady' | 'damped' | 'sustained' | 'undecided' | 'stopped' | 'lost';

export const MARK_STATES: readonly MarkState[] = [
  'steady',
  'damped',
  'sustained',
  'undecided',
  'stopped',
  'lost',
];

/** The colour token that each state is drawn in. */
export const MARK_COLOUR: Record<MarkState, string> = {
  steady: 'var(--steady)',
  damped: 'var(--damped)',
  sustained: 'var(--sustained)',
  undecided: 'var(--undecided)',
  stopped: 'var(--stop)',
  lost: 'var(--ink2)',
};
