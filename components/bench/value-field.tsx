'use client';

import { decimalsOfStep, unitText } from '@/lib/format';

export type ValueFieldProps = {
  id: string;
  label: string;
  /** UCUM code */
  unit: string;
  /** as typed, with a decimal point */
  value: string;
  onChange: (value: string) => void;
  /** what − and + take and add */
  step: number;
  /** what the first press of − or + gives while nothing is typed */
  from?: number;
  min?: number;
  max?: number;
  /** "usual 4.5 to 5.5 mL" */
  usual?: string;
  problem?: string;
};

const key =
  'press size-20 shrink-0 rounded-key border-[1.5px] border-edge bg-plate text-[36px] leading-none font-semibold hover:border-ink hover:bg-well';

/** The value one step on, held between its bounds, with the decimals of step and value. */
export function moved(
  { value, step, from: first, min, max }: Omit<ValueFieldProps, 'onChange'>,
  direction: 1 | -1,
): string {
  if (first !== undefined && value.trim() === '') return String(first);
  const now = Number(value);
  const from = Number.isFinite(now) && value.trim() !== '' ? now : (min ?? 0);
  const held = Math.min(Math.max(from + direction * step, min ?? -Infinity), max ?? Infinity);
  return held.toFixed(Math.max(decimalsOfStep(step), decimalsIn(value)));
}

/** One figure with − and +, all 80 px high, for gloved hands. */
export function ValueField(props: ValueFieldProps) {
  const { id, label, unit, value, onChange, usual, problem } = props;
  const move = (direction: 1 | -1) => onChange(moved(props, direction));
  return (
    <div>
      <label htmlFor={id} className="block text-bench text-ink2">
        {label}
      </label>
      <div className="mt-[5px] flex flex-wrap items-center gap-3">
        <span className="relative block w-full max-w-[300px]">
          <input
            id={id}
            name={id}
            inputMode="decimal"
            autoComplete="off"
            value={value}
            onChange={(event) => onChange(event.target.value)}
            aria-invalid={problem ? true : undefined}
            aria-describedby={problem ? `${id}-problem` : usual ? `${id}-usual` : undefined}
            className="h-20 w-full rounded-key border-2 border-ink bg-paper pr-24 pl-[22px] font-mono text-bench-field font-semibold"
          />
          <span className="pointer-events-none absolute inset-y-0 right-[22px] flex items-center text-[24px] text-ink2">
            {unitText(unit)}
          </span>
        </span>
        <StepKey name={`${label}: less`} sign={'\u2212'} onPress={() => move(-1)} />
        <StepKey name={`${label}: more`} sign="+" onPress={() => move(1)} />
        {usual ? (
          <span id={`${id}-usual`} className="pl-2 text-bench text-ink2">
            {usual}
          </span>
        ) : null}
      </div>
      {problem ? (
        <p
          id={`${id}-problem`}
          role="alert"
          className="mt-2 border-l-[3px] border-ink pl-2 text-bench font-semibold"
        >
          {problem}
        </p>
      ) : null}
    </div>
  );
}

function StepKey(props: { name: string; sign: string; onPress: () => void }) {
  return (
    <button type="button" className={key} onClick={props.onPress} aria-label={props.name}>
      {props.sign}
    </button>
  );
}

function decimalsIn(text: string): number {
  const [, decimals = ''] = text.trim().split('.');
  return Math.min(decimals.length, 6);
}
