'use client';

import { useCallback, useState } from 'react';
import { cancelJob } from '@/app/(lab)/jobs-actions';
import {
  ActionProblem,
  Check,
  FieldGroup,
  FollowJob,
  NumberField,
  Select,
  TextField,
  useAction,
} from '@/components/forms';
import { Key, Plate } from '@/components/ui';
import { designForm } from '@/lib/contracts/forms/series';
import { intervalText } from '@/lib/format';
import { askDesignAction } from '../actions';

type Onset = {
  ordinal: number;
  value: number;
  low: number | null;
  high: number | null;
  reachable: boolean;
};
type Props = {
  studyId: string;
  predictionId: string;
  onsets: Onset[];
  unit: string;
  first: boolean;
};

const SCHEMES = [
  { value: 'climb', label: 'Climb: one preparation, level after level' },
  { value: 'fresh', label: 'Fresh: a new preparation for each level' },
  { value: 'parallel', label: 'Parallel: all levels at once' },
];
const ORDERS = [
  { value: 'ascending', label: 'Ascending dose' },
  { value: 'descending', label: 'Descending dose' },
  { value: 'both', label: 'Both ways: rising, then falling' },
  { value: 'randomised', label: 'Randomised' },
];

const number = (form: FormData, key: string) => {
  const text = String(form.get(key) ?? '').trim();
  return text === '' ? undefined : Number(text);
};
const minutes = (form: FormData, key: string) => {
  const hours = number(form, key);
  return hours === undefined ? undefined : hours * 60;
};

function readForm(form: FormData, props: Props) {
  return designForm.safeParse({
    studyId: props.studyId,
    predictionId: props.predictionId,
    onsets: props.onsets.filter((o) => form.get(`onset-${o.ordinal}`)).map((o) => o.ordinal),
    scheme: form.get('scheme'),
    order: form.get('order'),
    levels: number(form, 'levels'),
    replicates: number(form, 'replicates'),
    doubtFactor: number(form, 'doubtFactor'),
    settleCapMinutes: minutes(form, 'settleCap'),
    recordCapMinutes: minutes(form, 'recordCap'),
    reason: String(form.get('reason') ?? ''),
  });
}

/** What to look for, how, and with how much; the engine chooses the levels. */
export function DesignPanel(props: Props) {
  const [jobId, setJobId] = useState<string | null>(null);
  const [faults, setFaults] = useState<Record<string, string>>({});
  const { run, pending, problem } = useAction(askDesignAction, {
    onDone: (asked) => setJobId(asked.jobId),
  });
  const again = useCallback(() => setJobId(null), []);
  if (jobId) {
    return (
      <div className="mt-6">
        <FollowJob
          jobId={jobId}
          what="edges"
          words="Choosing the levels."
          cancel={cancelJob}
          onDone={again}
          onAgain={again}
        />
      </div>
    );
  }
  function submit(event: React.FormEvent<HTMLFormElement>) {
    event.preventDefault();
    const read = readForm(new FormData(event.currentTarget), props);
    if (read.success) {
      setFaults({});
      void run(read.data);
      return;
    }
    const found = read.error.issues.map((i) => [String(i.path[0] ?? 'form'), i.message] as const);
    setFaults(Object.fromEntries([...found].reverse()));
    document.getElementById(String(found[0]?.[0]))?.focus();
  }
  return (
    <Plate title={props.first ? 'Design a series' : 'Design another version'} className="mt-6">
      <form noValidate onSubmit={submit} className="flex flex-col gap-4">
        <OnsetChoice {...props} fault={faults.onsets} />
        <Figures faults={faults} />
        <TextField id="reason" label="Why this version" optional={props.first} maxLength={300} />
        <ActionProblem problem={problem} />
        <Key
          type="submit"
          kind={props.first ? 'filled' : 'outlined'}
          pending={pending}
          className="self-start"
        >
          {pending ? 'Asking' : 'Choose the levels'}
        </Key>
      </form>
    </Plate>
  );
}

function OnsetChoice({ onsets, unit, fault }: Props & { fault: string | undefined }) {
  return (
    <FieldGroup legend="Look for the onset at">
      {onsets.map((o) => (
        <Check
          key={o.ordinal}
          id={`onset-${o.ordinal}`}
          value="1"
          disabled={!o.reachable}
          defaultChecked={o.reachable}
          label={
            o.low !== null && o.high !== null
              ? intervalText({ value: o.value, low: o.low, high: o.high }, { unit })
              : `${o.value.toPrecision(3)} ${unit}`
          }
          hint={o.reachable ? undefined : 'No dose reaches it.'}
        />
      ))}
      {fault ? <p className="border-l-[3px] border-ink pl-2 font-semibold">{fault}</p> : null}
    </FieldGroup>
  );
}

function Figures({ faults }: { faults: Record<string, string> }) {
  return (
    <div className="grid gap-4 tablet:grid-cols-2 desk:grid-cols-4">
      <Select
        id="scheme"
        label="Scheme"
        options={SCHEMES}
        defaultValue="climb"
        problem={faults.scheme}
      />
      <Select
        id="order"
        label="Order"
        options={ORDERS}
        defaultValue="ascending"
        problem={faults.order}
      />
      <NumberField
        id="levels"
        label="Levels an onset"
        hint="Baseline and far side come on top."
        defaultValue={4}
        min={1}
        problem={faults.levels}
      />
      <NumberField
        id="replicates"
        label="Preparations"
        hint="Independent ones; aliquots do not count."
        defaultValue={2}
        min={1}
        problem={faults.replicates}
      />
      <NumberField
        id="doubtFactor"
        label="Model doubt"
        hint="The model may be off by this factor."
        unit="×"
        defaultValue={2}
        min={1}
        problem={faults.doubtFactor}
      />
      <NumberField
        id="settleCap"
        label="Settle at most"
        unit="h"
        optional
        problem={faults.settleCapMinutes}
      />
      <NumberField
        id="recordCap"
        label="Record at most"
        unit="h"
        optional
        problem={faults.recordCapMinutes}
      />
    </div>
  );
}
