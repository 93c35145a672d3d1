'use client';

import { Key, Plate } from '@/components/ui';
import { unitText } from '@/lib/format';
import { Cell, CellProblem, Labelled, RemoveKey, SelectCell } from './cell';
import {
  type DoseMapDraft,
  emptyTableRow,
  MAP_KEYS,
  type MapKey,
  type MapNumberDraft,
  type TableRowDraft,
} from './draft';
import type { SectionProps } from './section';
import { SpreadCells } from './spread-cells';

const MAP_KINDS = [
  { value: 'identity', label: 'the dose is the control parameter' },
  { value: 'linear', label: 'linear' },
  { value: 'hill-inhibition', label: 'Hill, inhibiting' },
  { value: 'hill-activation', label: 'Hill, activating' },
  { value: 'table', label: 'calibration table' },
];

const FORMULA: Record<DoseMapDraft['kind'], string> = {
  identity: 'control = dose',
  linear: 'control = slope · dose + offset',
  'hill-inhibition': 'control = floor + (base − floor) / (1 + (dose/ec50)^hill)',
  'hill-activation': 'control = base + (top − base) · dose^hill / (ec50^hill + dose^hill)',
  table: 'monotone cubic between the rows, nothing beyond them',
};

const symbolsOf = (draft: SectionProps['draft']) =>
  [...new Set([...draft.parameters.map((p) => p.symbol.trim()), draft.control.symbol])].filter(
    Boolean,
  );

/** Which parameter is turned and how far, and the map from dose to control. */
export function ControlSection(props: SectionProps & { doseLabel: string; doseUnit: string }) {
  const { draft, change, problemAt } = props;
  const { control } = draft;
  const end = (key: 'from' | 'to', title: string) => (
    <Labelled title={title}>
      <Cell
        at={`control.${key}`}
        label={`${title} of the control range`}
        value={control[key]}
        change={(value) => change({ control: { ...control, [key]: value } })}
        problem={problemAt(`control.${key}`)}
      />
    </Labelled>
  );
  return (
    <Plate title="Control parameter and dose">
      <div className="grid gap-3 tablet:grid-cols-3">
        <Labelled title="Control parameter">
          <SelectCell
            at="control.symbol"
            label="Control parameter"
            value={control.symbol}
            options={symbolsOf(draft).map((s) => ({ value: s, label: s }))}
            change={(symbol) => change({ control: { ...control, symbol } })}
            problem={problemAt('control.symbol')}
          />
        </Labelled>
        {end('from', 'From')}
        {end('to', 'To')}
      </div>
      <DoseMapFields {...props} />
    </Plate>
  );
}

function DoseMapFields(props: SectionProps & { doseLabel: string; doseUnit: string }) {
  const { draft, change, problemAt, doseLabel, doseUnit } = props;
  const { doseMap } = draft;
  const set = (part: Partial<DoseMapDraft>) => change({ doseMap: { ...doseMap, ...part } });
  const at = 'control.doseMap';
  return (
    <div className="mt-4 border-t border-rule pt-4">
      <div className="grid gap-3 tablet:grid-cols-3">
        <Labelled
          title={`From dose (${[doseLabel, unitText(doseUnit)].filter(Boolean).join(', ')}) to control`}
        >
          <SelectCell
            at={`${at}.kind`}
            label="Dose map"
            value={doseMap.kind}
            options={MAP_KINDS}
            change={(kind) => set({ kind: kind as DoseMapDraft['kind'] })}
          />
        </Labelled>
        <p className="self-end font-mono text-caption text-ink2 tablet:col-span-2 tablet:pb-2">
          {FORMULA[doseMap.kind]}
        </p>
      </div>
      <CellProblem at={at} problem={problemAt(at)} />
      <div className="mt-3 flex flex-col gap-3">
        {MAP_KEYS[doseMap.kind].map((key) => (
          <MapNumber
            key={key}
            at={`${at}.${key}`}
            name={key}
            entry={doseMap.numbers[key]}
            change={(entry) => set({ numbers: { ...doseMap.numbers, [key]: entry } })}
            problemAt={problemAt}
          />
        ))}
        {doseMap.kind === 'table' ? (
          <TableRows rows={doseMap.rows} change={(rows) => set({ rows })} problemAt={problemAt} />
        ) : null}
      </div>
    </div>
  );
}

function MapNumber(props: {
  at: string;
  name: MapKey | string;
  entry: MapNumberDraft;
  change: (entry: MapNumberDraft) => void;
  problemAt: SectionProps['problemAt'];
}) {
  const { at, name, entry, change, problemAt } = props;
  return (
    <div className="grid gap-3 tablet:grid-cols-[5rem_12rem_minmax(0,20rem)] tablet:items-start">
      <span className="font-mono tablet:pt-2">{name}</span>
      <Cell
        at={at}
        label={`${name} of the dose map`}
        value={entry.value}
        change={(value) => change({ ...entry, value })}
        problem={problemAt(at)}
      />
      <SpreadCells
        at={`${at}.spread`}
        of={`${name} of the dose map`}
        spread={entry.spread}
        change={(spread) => change({ ...entry, spread })}
        problemAt={problemAt}
      />
    </div>
  );
}

function TableRows(props: {
  rows: TableRowDraft[];
  change: (rows: TableRowDraft[]) => void;
  problemAt: SectionProps['problemAt'];
}) {
  const { rows, change, problemAt } = props;
  const set = (i: number, part: Partial<TableRowDraft>) =>
    change(rows.map((r, j) => (j === i ? { ...r, ...part } : r)));
  return (
    <>
      {rows.map((row, i) => (
        <div
          key={row.key}
          className="grid gap-3 tablet:grid-cols-[8rem_8rem_minmax(0,24rem)_auto] tablet:items-start"
        >
          <Cell
            at={`control.doseMap.dose.${i}`}
            label={`Dose of row ${i + 1}`}
            placeholder="dose"
            value={row.dose}
            change={(dose) => set(i, { dose })}
            problem={problemAt(`control.doseMap.dose.${i}`)}
          />
          <Cell
            at={`control.doseMap.value.${i}`}
            label={`Control value of row ${i + 1}`}
            placeholder="control"
            value={row.value.value}
            change={(value) => set(i, { value: { ...row.value, value } })}
            problem={problemAt(`control.doseMap.value.${i}`)}
          />
          <SpreadCells
            at={`control.doseMap.value.${i}.spread`}
            of={`row ${i + 1}`}
            spread={row.value.spread}
            change={(spread) => set(i, { value: { ...row.value, spread } })}
            problemAt={problemAt}
          />
          {rows.length > 2 ? (
            <RemoveKey what={`row ${i + 1}`} press={() => change(rows.filter((_, j) => j !== i))} />
          ) : (
            <span />
          )}
        </div>
      ))}
      <div>
        <Key onClick={() => change([...rows, emptyTableRow()])}>Add row</Key>
      </div>
    </>
  );
}
