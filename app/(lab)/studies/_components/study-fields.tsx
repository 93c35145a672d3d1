'use client';

import { NumberField, Select, TextArea, TextField } from '@/components/forms';
import { Plate } from '@/components/ui';
import { needsApproval, type PerturbedKind, perturbedKinds } from '@/lib/contracts/forms/study';
import type { StudyDraft } from './study-draft';

type FieldsProps = {
  draft: StudyDraft;
  change: (part: Partial<StudyDraft>) => void;
  problems: Record<string, string>;
  rigs: { id: string; name: string; place: string }[];
};

const perturbedOptions = [
  { value: '', label: 'Choose', disabled: true },
  ...perturbedKinds.map((kind) => ({ value: kind, label: kind })),
];

function bind({ draft, change, problems }: FieldsProps, id: keyof StudyDraft) {
  return {
    id,
    value: draft[id],
    onChange: (event: { target: { value: string } }) => change({ [id]: event.target.value }),
    problem: problems[id],
  };
}

/** Title, what is perturbed, where it is done. */
export function AboutFields(props: FieldsProps) {
  const rigOptions = [
    { value: '', label: 'None yet' },
    ...props.rigs.map((rig) => ({ value: rig.id, label: `${rig.name}, ${rig.place}` })),
  ];
  return (
    <Plate title="The study">
      <div className="grid gap-4 tablet:grid-cols-2">
        <TextField label="Title" {...bind(props, 'title')} maxLength={200} />
        <TextField
          label="In one line"
          optional
          hint="Stands beside the title: model, vessels, question."
          {...bind(props, 'summary')}
          maxLength={500}
        />
        <Select
          label="What is perturbed"
          options={perturbedOptions}
          hint="Animals and human volunteers need an approval."
          {...bind(props, 'perturbs')}
        />
        <Select label="Rig" options={rigOptions} {...bind(props, 'rigId')} />
      </div>
    </Plate>
  );
}

/** Dose, ceiling, largest step and stop rules: no route sets a level beyond them. */
export function LimitFields(props: FieldsProps) {
  const unit = props.draft.doseUnit;
  return (
    <Plate title="Dose and limits">
      <div className="grid gap-4 tablet:grid-cols-2">
        <TextField
          label="What is set at the bench"
          hint="Such as pump rate, inducer, added delay."
          {...bind(props, 'doseLabel')}
        />
        <TextField
          label="Unit of the dose"
          hint="UCUM code, such as mL/h, umol/L, ms."
          {...bind(props, 'doseUnit')}
        />
        <NumberField
          label="Ceiling dose"
          hint="No level is ever placed above it."
          unit={unit}
          {...bind(props, 'ceilingDose')}
        />
        <NumberField
          label="Largest step"
          hint="The dose never rises by more at once."
          unit={unit}
          {...bind(props, 'largestStep')}
        />
        <TextArea
          className="tablet:col-span-2"
          label="Stop rules"
          hint="In words, for whoever stands at the bench: at what sign is a run stopped?"
          rows={4}
          {...bind(props, 'stopRules')}
        />
      </div>
    </Plate>
  );
}

/** The approval: required for animals and volunteers, possible for every study. */
export function ApprovalFields(props: FieldsProps) {
  const needed = needsApproval(props.draft.perturbs as PerturbedKind);
  return (
    <Plate title="Approval">
      <div className="grid gap-4 tablet:grid-cols-2">
        <TextField
          label="Approval reference"
          optional={!needed}
          hint={
            needed
              ? 'As it stands on the ethics committee’s or authority’s paper.'
              : 'If this work needs one.'
          }
          {...bind(props, 'approvalReference')}
        />
        <TextField
          type="date"
          label="Expires"
          optional={!needed}
          hint="Last day on which it holds; the last visit must fall before its end."
          {...bind(props, 'approvalExpires')}
        />
      </div>
    </Plate>
  );
}
