'use client';

import { useEffect, useRef } from 'react';
import { ActionProblem, FormProblem, TextArea, TextField } from '@/components/forms';
import { Key, Plate } from '@/components/ui';
import type { FieldProblem } from '@/lib/contracts/forms/system';
import { ControlSection } from './control-section';
import type { SystemDraft } from './draft';
import { ParametersSection } from './parameters-section';
import { ReadoutsSection } from './readouts-section';
import { type SystemFormStart, useSystemForm } from './use-system-form';
import { VariablesSection } from './variables-section';

type Props = SystemFormStart & { doseLabel: string; doseUnit: string };

/** A system as a form. Saving makes the next version; what was typed stays until that is done. */
export function SystemForm({ doseLabel, doseUnit, ...start }: Props) {
  const form = useRef<HTMLFormElement>(null);
  const held = useSystemForm(start);
  const { draft, change, found, problem, pending, saved, reason } = held;
  // Once they are drawn, not when the answer comes: a busy tablet may need a while in between.
  useEffect(() => {
    if (found.length > 0) focusProblem(form.current);
  }, [found]);
  const problemAt = finder(found);
  const section = { draft, change, problemAt };
  return (
    <form
      ref={form}
      noValidate
      className="flex flex-col gap-6"
      onSubmit={(event) => {
        event.preventDefault();
        void held.submit();
      }}
    >
      <NameSection {...section} />
      <VariablesSection {...section} />
      <ParametersSection {...section} />
      <ControlSection {...section} doseLabel={doseLabel} doseUnit={doseUnit} />
      <ReadoutsSection {...section} />
      <Plate title="Save as the next version">
        <div className="flex max-w-[640px] flex-col gap-4">
          <TextArea
            id="reason"
            label="What changed and why"
            rows={2}
            maxLength={300}
            value={reason}
            onChange={(event) => held.setReason(event.target.value)}
            problem={problemAt('reason')}
          />
          <Summary problems={found} />
          <ActionProblem problem={problem} />
          <div className="flex flex-wrap items-center gap-4">
            <Key kind="filled" type="submit" pending={pending}>
              {pending ? 'Checking and saving' : 'Save'}
            </Key>
            <p role="status" className="text-ink2">
              {saved ? `Saved as System v${saved}.` : 'Earlier versions stay as they are.'}
            </p>
          </div>
        </div>
      </Plate>
    </form>
  );
}

/** The problem of a field, by its dotted path. */
function finder(problems: FieldProblem[]) {
  const byField = new Map(problems.map((p) => [p.at, p.message]));
  return (at: string) => byField.get(at);
}

function focusProblem(form: HTMLFormElement | null) {
  form?.querySelector<HTMLElement>('[aria-invalid="true"], [data-problems]')?.focus();
}

/** All that has to be mended, each line leading to its field. */
function Summary({ problems }: { problems: FieldProblem[] }) {
  if (problems.length === 0) return null;
  return (
    <div tabIndex={-1} data-problems>
      <FormProblem
        problems={problems.map((p) => ({
          what: p.message,
          where: placeName(p.at),
          fieldId: p.at,
        }))}
      />
    </div>
  );
}

/** A dotted path in words: `model.parameters.2.value` is "parameter 3, value". */
function placeName(at: string): string {
  const [root, list, index, ...rest] = at.split('.');
  if (root !== 'model') return [root, list, index, ...rest].filter(Boolean).join(', ');
  if (list === 'equations') return `equation of ${index ?? ''}`;
  const singular: Record<string, string> = {
    variables: 'variable',
    parameters: 'parameter',
    readouts: 'readout',
  };
  const name = singular[list ?? ''] ?? list;
  const place = index === undefined ? '' : ` ${Number(index) + 1}`;
  return [`${name}${place}`, ...rest].join(', ');
}

type NameProps = {
  draft: SystemDraft;
  change: (part: Partial<SystemDraft>) => void;
  problemAt: (at: string) => string | undefined;
};

function NameSection({ draft, change, problemAt }: NameProps) {
  return (
    <Plate>
      <div className="grid gap-4 tablet:grid-cols-[minmax(0,1fr)_12rem]">
        <TextField
          id="model.name"
          label="Name of the model"
          value={draft.name}
          onChange={(event) => change({ name: event.target.value })}
          problem={problemAt('model.name')}
        />
        <TextField
          id="model.timeUnit"
          label="Unit of time"
          hint="ms, s, min, h or d"
          value={draft.timeUnit}
          onChange={(event) => change({ timeUnit: event.target.value })}
          problem={problemAt('model.timeUnit')}
        />
      </div>
    </Plate>
  );
}
