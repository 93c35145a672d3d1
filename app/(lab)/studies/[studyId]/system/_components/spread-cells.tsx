'use client';

import { Cell, CellProblem, SelectCell } from './cell';
import type { SpreadDraft } from './draft';

const kinds = [
  { value: 'none', label: 'exactly known' },
  { value: 'normal', label: 'normal, sd' },
  { value: 'lognormal', label: 'lognormal, cv' },
  { value: 'uniform', label: 'uniform, from to' },
];

/** How sure a number is: the kind of its spread, and its width. */
export function SpreadCells(props: {
  at: string;
  of: string;
  spread: SpreadDraft;
  change: (spread: SpreadDraft) => void;
  problemAt: (at: string) => string | undefined;
}) {
  const { at, of, spread, change, problemAt } = props;
  const width = (key: 'a' | 'b', name: string, label: string) => (
    <Cell
      at={`${at}.${name}`}
      label={`${label} of ${of}`}
      placeholder={label}
      value={spread[key]}
      change={(value) => change({ ...spread, [key]: value })}
      problem={problemAt(`${at}.${name}`)}
    />
  );
  return (
    <div className="flex min-w-0 flex-col gap-1">
      <div className="grid min-w-0 grid-cols-[9.5rem_minmax(0,1fr)] gap-2">
        <SelectCell
          at={`${at}.kind`}
          label={`Spread of ${of}`}
          value={spread.kind}
          options={kinds}
          change={(kind) => change({ ...spread, kind: kind as SpreadDraft['kind'] })}
        />
        {spread.kind === 'normal' ? width('a', 'sd', 'sd') : null}
        {spread.kind === 'lognormal' ? width('a', 'cv', 'cv') : null}
        {spread.kind === 'uniform' ? (
          <div className="grid grid-cols-2 gap-2">
            {width('a', 'low', 'lowest')}
            {width('b', 'high', 'highest')}
          </div>
        ) : null}
      </div>
      <CellProblem at={at} problem={problemAt(at)} />
    </div>
  );
}
