'use client';

import { FieldGroup, Select, TextField } from '@/components/forms';
import { unitText } from '@/lib/format';
import type { MappingDraft } from './mapping-draft';

export type Readout = { symbol: string; unit: string; name: string };
type Props = {
  draft: MappingDraft;
  columns: string[];
  readouts: Readout[];
  faults: Record<string, string>;
  onChange: (change: Partial<MappingDraft>) => void;
};

const choose = { value: '', label: 'Choose' };
const DELIMITERS = [
  choose,
  { value: ',', label: 'Comma ,' },
  { value: ';', label: 'Semicolon ;' },
  { value: '\t', label: 'Tab' },
  { value: '|', label: 'Bar |' },
];
const MARKS = [choose, { value: '.', label: 'Point: 1.25' }, { value: ',', label: 'Comma: 1,25' }];
const KINDS = [
  choose,
  { value: 'elapsed', label: 'Time since the dose was set' },
  { value: 'date and clock', label: 'Date and clock' },
];
const UNITS = [
  choose,
  ...['ms', 's', 'min', 'h', 'd', 'wk'].map((u) => ({ value: u, label: unitText(u) })),
];

/** Marks and columns as the file has them; nothing is guessed for good. */
export function MappingFields(props: Props) {
  const { draft, columns, faults, onChange } = props;
  const set = (key: keyof MappingDraft) => (event: { target: { value: string } }) =>
    onChange({ [key]: event.target.value });
  const select = (
    key: Exclude<keyof MappingDraft, 'readouts'>,
    label: string,
    options: typeof MARKS,
  ) => (
    <Select
      id={key}
      label={label}
      options={options}
      value={draft[key]}
      problem={faults[key]}
      onChange={set(key)}
    />
  );
  const timeColumns = [choose, ...columns.map((c) => ({ value: c, label: c }))];
  return (
    <>
      <div className="grid gap-4 tablet:grid-cols-2 desk:grid-cols-4">
        {select('delimiter', 'Between columns', DELIMITERS)}
        {select('decimalMark', 'Decimal mark', MARKS)}
        {select('timeColumn', 'Time column', timeColumns)}
        {select('timeKind', 'It holds', KINDS)}
        {draft.timeKind === 'elapsed' ? select('timeUnit', 'Unit of time', UNITS) : null}
        {draft.timeKind === 'date and clock' ? <ClockFields {...props} set={set} /> : null}
        <TextField
          id="missingMarks"
          label="Marks of a missing value"
          hint="Apart by spaces; an empty cell always is."
          optional
          value={draft.missingMarks}
          problem={faults.missingMarks}
          onChange={set('missingMarks')}
        />
        <TextField
          id="belowLimitMark"
          label="Mark of a value below the limit"
          hint="Such as < in <0.05"
          optional
          value={draft.belowLimitMark}
          problem={faults.belowLimitMark}
          onChange={set('belowLimitMark')}
        />
      </div>
      <ColumnFields {...props} />
    </>
  );
}

function ClockFields({
  draft,
  faults,
  set,
}: Props & { set: (key: keyof MappingDraft) => (event: { target: { value: string } }) => void }) {
  return (
    <>
      <TextField
        id="timeZone"
        label="Zone of the clock"
        hint="Such as Europe/Berlin or UTC"
        value={draft.timeZone}
        problem={faults.timeZone}
        onChange={set('timeZone')}
      />
      <TextField
        id="dateFormat"
        label="Pattern"
        hint="Such as dd.MM.yyyy HH:mm; empty for 2026-03-28T22:00"
        optional
        value={draft.dateFormat}
        problem={faults.dateFormat}
        onChange={set('dateFormat')}
      />
    </>
  );
}

function ColumnFields({ draft, columns, readouts, faults, onChange }: Props) {
  const values = columns.filter((c) => c !== draft.timeColumn);
  if (values.length === 0) return null;
  const options = [
    { value: '', label: 'Not used' },
    ...readouts.map((r) => {
      const unit = unitText(r.unit);
      return { value: r.symbol, label: unit ? `${r.name}, in ${unit}` : r.name };
    }),
  ];
  return (
    <FieldGroup legend="Columns of values">
      <div
        id="valueColumns"
        tabIndex={-1}
        className="grid gap-4 tablet:grid-cols-2 desk:grid-cols-4"
      >
        {values.map((column, i) => (
          <Select
            key={column}
            id={`column-${i}`}
            label={column || '(no name)'}
            options={options}
            value={draft.readouts[column] ?? ''}
            onChange={(event) =>
              onChange({ readouts: { ...draft.readouts, [column]: event.target.value } })
            }
          />
        ))}
      </div>
      {faults.valueColumns ? (
        <p className="border-l-[3px] border-ink pl-2 text-caption font-semibold">
          {faults.valueColumns}
        </p>
      ) : null}
    </FieldGroup>
  );
}
