'use client';

import { Key, Plate } from '@/components/ui';
import { Cell, Labelled, RemoveKey } from './cell';
import { emptyParameter, type ParameterDraft } from './draft';
import type { SectionProps } from './section';
import { SpreadCells } from './spread-cells';

/** Parameters with their values, and how sure each is. */
export function ParametersSection({ draft, change, problemAt }: SectionProps) {
  const set = (i: number, part: Partial<ParameterDraft>) =>
    change({ parameters: draft.parameters.map((p, j) => (j === i ? { ...p, ...part } : p)) });
  const add = (
    <Key onClick={() => change({ parameters: [...draft.parameters, emptyParameter()] })}>
      Add parameter
    </Key>
  );
  return (
    <Plate title="Parameters" actions={add}>
      <p className="mb-4 max-w-[640px] text-caption text-ink2">
        The spread says how sure a value is; the onset band follows from it. A lognormal spread has
        the value as its median and cv as its coefficient of variation (0.1 is 10 %). The control
        parameter’s own value and spread are not used.
      </p>
      <ul className="flex flex-col gap-3">
        {draft.parameters.map((p, i) => {
          const at = `model.parameters.${i}`;
          const name = p.symbol.trim() || `parameter ${i + 1}`;
          const cell = (key: 'symbol' | 'value' | 'unit' | 'label', title: string) => (
            <Labelled title={title}>
              <Cell
                at={`${at}.${key}`}
                label={`${title} of ${name}`}
                value={p[key]}
                change={(value) => set(i, { [key]: value })}
                problem={problemAt(`${at}.${key}`)}
                mono={key !== 'label'}
              />
            </Labelled>
          );
          return (
            <li
              key={p.key}
              className="grid grid-cols-2 gap-3 border-b border-rule pb-3 last:border-b-0 last:pb-0 tablet:grid-cols-[6rem_7rem_7rem_minmax(0,1fr)_auto] desk:grid-cols-[5rem_6.5rem_6rem_minmax(0,1fr)_19rem_auto] tablet:items-start"
            >
              {cell('symbol', 'Symbol')}
              {cell('value', 'Value')}
              {cell('unit', 'Unit')}
              {cell('label', 'In words')}
              <div className="col-span-2 tablet:order-last tablet:col-span-5 desk:order-none desk:col-span-1">
                <Labelled title="How sure">
                  <SpreadCells
                    at={`${at}.spread`}
                    of={name}
                    spread={p.spread}
                    change={(spread) => set(i, { spread })}
                    problemAt={problemAt}
                  />
                </Labelled>
              </div>
              <div className="pt-5">
                <RemoveKey
                  what={name}
                  press={() => change({ parameters: draft.parameters.filter((_, j) => j !== i) })}
                />
              </div>
            </li>
          );
        })}
      </ul>
    </Plate>
  );
}
