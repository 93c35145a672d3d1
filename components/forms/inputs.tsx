import clsx from 'clsx';
import type {
  InputHTMLAttributes,
  ReactNode,
  SelectHTMLAttributes,
  TextareaHTMLAttributes,
} from 'react';
import { unitText } from '@/lib/format';
import { controlClass, describedBy, Field, type FieldProps } from './field';

type Own = keyof FieldProps;
type Rest<T> = Omit<T, Own | 'children'>;

function split<T extends FieldProps>(props: T) {
  const { id, label, hint, problem, optional, className, ...rest } = props;
  return { field: { id, label, hint, problem, optional, className }, rest };
}

export function TextField(props: FieldProps & Rest<InputHTMLAttributes<HTMLInputElement>>) {
  const { field, rest } = split(props);
  return (
    <Field {...field}>
      <input
        type="text"
        name={field.id}
        {...rest}
        {...describedBy(field)}
        id={field.id}
        className={controlClass}
      />
    </Field>
  );
}

type NumberProps = FieldProps &
  Rest<InputHTMLAttributes<HTMLInputElement>> & {
    /** UCUM code, shown in print at the right */
    unit?: string;
  };

/** A figure with its unit; any decimal may be typed. */
export function NumberField(props: NumberProps) {
  const { field, rest } = split(props);
  const { unit, ...input } = rest;
  const shown = unitText(unit);
  return (
    <Field {...field}>
      <span className="relative block">
        <input
          type="number"
          step="any"
          inputMode="decimal"
          name={field.id}
          {...input}
          {...describedBy(field)}
          id={field.id}
          className={clsx(controlClass, 'font-mono', shown && 'pr-20')}
        />
        {shown ? (
          <span className="pointer-events-none absolute inset-y-0 right-3 flex items-center text-ink2">
            {shown}
          </span>
        ) : null}
      </span>
    </Field>
  );
}

export type Option = { value: string; label: string; disabled?: boolean };

export function Select(
  props: FieldProps & Rest<SelectHTMLAttributes<HTMLSelectElement>> & { options: Option[] },
) {
  const { field, rest } = split(props);
  const { options, ...select } = rest;
  return (
    <Field {...field}>
      <select
        name={field.id}
        {...select}
        {...describedBy(field)}
        id={field.id}
        className={controlClass}
      >
        {options.map((option) => (
          <option key={option.value} value={option.value} disabled={option.disabled}>
            {option.label}
          </option>
        ))}
      </select>
    </Field>
  );
}

export function TextArea(props: FieldProps & Rest<TextareaHTMLAttributes<HTMLTextAreaElement>>) {
  const { field, rest } = split(props);
  return (
    <Field {...field}>
      <textarea
        rows={3}
        name={field.id}
        {...rest}
        {...describedBy(field)}
        id={field.id}
        className={controlClass}
      />
    </Field>
  );
}

type CheckProps = {
  id: string;
  label: ReactNode;
  hint?: ReactNode;
} & Omit<InputHTMLAttributes<HTMLInputElement>, 'id' | 'type' | 'className'>;

/** A tick box, or one of a set when `type` is radio. */
export function Check({
  id,
  label,
  hint,
  kind = 'checkbox',
  ...rest
}: CheckProps & { kind?: 'checkbox' | 'radio' }) {
  return (
    <div className="flex min-h-6 items-start gap-2">
      <input
        name={id}
        {...rest}
        type={kind}
        id={id}
        aria-describedby={hint ? `${id}-hint` : undefined}
        className="mt-0.5 size-[18px] shrink-0 accent-index pointer-coarse:size-6"
      />
      <div className="min-w-0">
        <label htmlFor={id}>{label}</label>
        {hint ? (
          <p id={`${id}-hint`} className="text-caption text-ink2">
            {hint}
          </p>
        ) : null}
      </div>
    </div>
  );
}

/** Fields that belong together, under one name. */
export function FieldGroup({ legend, children }: { legend: ReactNode; children: ReactNode }) {
  return (
    <fieldset className="min-w-0">
      <legend className="mb-2 text-caption font-semibold">{legend}</legend>
      <div className="flex flex-col gap-3">{children}</div>
    </fieldset>
  );
}
