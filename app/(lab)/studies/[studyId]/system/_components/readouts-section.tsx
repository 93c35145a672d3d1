'use client';

import { Key, Plate } from '@/components/ui';
import { Cell, Labelled, RemoveKey } from './cell';
import { emptyReadout, type ReadoutDraft } from './draft';
import type { SectionProps } from './section';

/** What is measured: an expression of the variables, its unit and the noise of one reading. */
export function ReadoutsSection({ draft, change, problemAt }: SectionProps) {
  const set = (i: number, part: Partial<ReadoutDraft>) =>
    change({ readouts: draft.readouts.map((r, j) => (j === i ? { ...r, ...part } : r)) });
  const add = (
    <Key onClick={() => change({ readouts: [...draft.readouts, emptyReadout()] })}>Add readout</Key>
  );
  return (
    <Plate title="Readouts" actions={add}>
      {draft.readouts.length === 0 ? (
        <p className="text-ink2">None written: every variable is read, without noise.</p>
      ) : null}
      <ul className="flex flex-col gap-3">
        {draft.readouts.map((r, i) => {
          const at = `model.readouts.${i}`;
          const name = r.symbol.trim() || `readout ${i + 1}`;
          const cell = (key: 'symbol' | 'expression' | 'unit' | 'noiseSd', title: string) => (
            <Labelled title={title}>
              <Cell
                at={`${at}.${key}`}
                label={`${title} of ${name}`}
                value={r[key]}
                change={(value) => set(i, { [key]: value })}
                problem={problemAt(`${at}.${key}`)}
              />
            </Labelled>
          );
          return (
            <li
              key={r.key}
              className="grid grid-cols-2 gap-3 tablet:grid-cols-[7rem_minmax(0,1fr)_8rem_8rem_auto] tablet:items-start"
            >
              {cell('symbol', 'Symbol')}
              {cell('expression', 'Expression')}
              {cell('unit', 'Unit')}
              {cell('noiseSd', 'Noise, sd')}
              <div className="pt-5">
                <RemoveKey
                  what={name}
                  press={() => change({ readouts: draft.readouts.filter((_, j) => j !== i) })}
                />
              </div>
            </li>
          );
        })}
      </ul>
    </Plate>
  );
}
