'use client';

import { Key, Plate } from '@/components/ui';
import { Cell, Labelled, RemoveKey } from './cell';
import { emptyVariable, type VariableDraft } from './draft';
import type { SectionProps } from './section';

/** Each variable with its equation, start and unit. */
export function VariablesSection({ draft, change, problemAt }: SectionProps) {
  const set = (i: number, part: Partial<VariableDraft>) =>
    change({ variables: draft.variables.map((v, j) => (j === i ? { ...v, ...part } : v)) });
  const add = (
    <Key onClick={() => change({ variables: [...draft.variables, emptyVariable()] })}>
      Add variable
    </Key>
  );
  return (
    <Plate title="Variables and their equations" actions={add}>
      <p className="mb-4 max-w-[640px] text-caption text-ink2">
        Right-hand sides, with + − * / ^, parentheses, exp log log10 sqrt sin cos tan sinh cosh tanh
        abs min max and pi. A delayed variable is written x(t - tau), its delay from parameters
        alone.
      </p>
      <ul className="flex flex-col divide-y divide-rule">
        {draft.variables.map((v, i) => (
          <li key={v.key} className="grid gap-3 py-4 first:pt-0 last:pb-0">
            <VariableRow
              variable={v}
              index={i}
              set={(part) => set(i, part)}
              remove={
                draft.variables.length > 1
                  ? () => change({ variables: draft.variables.filter((_, j) => j !== i) })
                  : null
              }
              problemAt={problemAt}
            />
          </li>
        ))}
      </ul>
    </Plate>
  );
}

function VariableRow(props: {
  variable: VariableDraft;
  index: number;
  set: (part: Partial<VariableDraft>) => void;
  remove: (() => void) | null;
  problemAt: SectionProps['problemAt'];
}) {
  const { variable: v, index, set, remove, problemAt } = props;
  const at = `model.variables.${index}`;
  const equationAt = `model.equations.${v.symbol.trim()}`;
  const name = v.symbol.trim() || `variable ${index + 1}`;
  const cell = (key: 'symbol' | 'start' | 'unit' | 'label', title: string, mono = true) => (
    <Labelled title={title}>
      <Cell
        at={`${at}.${key}`}
        label={`${title} of ${name}`}
        value={v[key]}
        change={(value) => set({ [key]: value })}
        problem={problemAt(`${at}.${key}`)}
        mono={mono}
      />
    </Labelled>
  );
  return (
    <>
      <div className="grid grid-cols-2 gap-3 tablet:grid-cols-[7rem_8rem_8rem_minmax(0,1fr)_auto_auto] tablet:items-end">
        {cell('symbol', 'Symbol')}
        {cell('start', 'Start')}
        {cell('unit', 'Unit')}
        {cell('label', 'In words', false)}
        <label className="flex min-h-10 items-center gap-2 text-caption">
          <input
            type="checkbox"
            className="size-[18px] accent-index pointer-coarse:size-6"
            checked={v.nonnegative}
            onChange={(event) => set({ nonnegative: event.target.checked })}
          />
          never negative
        </label>
        {remove ? <RemoveKey what={name} press={remove} /> : <span />}
      </div>
      <div className="grid grid-cols-[auto_minmax(0,1fr)] items-start gap-3">
        <span className="pt-2 font-mono text-body whitespace-nowrap">d{name}/dt =</span>
        <Cell
          at={equationAt}
          label={`Equation of ${name}`}
          value={v.equation}
          change={(equation) => set({ equation })}
          problem={problemAt(equationAt)}
          rows={Math.min(8, Math.max(2, Math.ceil(v.equation.length / 80)))}
        />
      </div>
    </>
  );
}
