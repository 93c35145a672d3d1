'use client';

import { useRouter } from 'next/navigation';
import { useRef, useState } from 'react';
import { v7 as uuid } from 'uuid';
import { ActionProblem, useAction } from '@/components/forms';
import { Key } from '@/components/ui';
import { createStudyInput } from '@/lib/contracts/forms/study';
import {
  fieldsOf,
  focusFirstProblem,
  problemsByField,
  refusalByField,
  type StudyDraft,
} from '../../_components/study-draft';
import { AboutFields, ApprovalFields, LimitFields } from '../../_components/study-fields';
import { createStudy } from '../actions';
import { type Origin, OriginFields } from './origin-fields';

export type Start = {
  id: string;
  title: string;
  summary?: string;
  source?: string;
  perturbs: string;
  doseLabel: string;
  doseUnit: string;
};

type Props = {
  models: Start[];
  studies: Start[];
  rigs: { id: string; name: string; place: string }[];
  wanted: { model: string | null; study: string | null };
};

const blank: StudyDraft = {
  title: '',
  summary: '',
  perturbs: '',
  rigId: '',
  doseLabel: '',
  doseUnit: '',
  ceilingDose: '',
  largestStep: '',
  stopRules: '',
  approvalReference: '',
  approvalExpires: '',
};

const startOf = ({ models, studies }: Props, origin: Origin) =>
  (origin.kind === 'library' ? models : studies).find((s) => s.id === origin.id);

const suggested = (start: Start | undefined): Partial<StudyDraft> =>
  start ? { perturbs: start.perturbs, doseLabel: start.doseLabel, doseUnit: start.doseUnit } : {};

function firstOrigin({ wanted, models }: Props): Origin {
  if (wanted.study) return { kind: 'study', id: wanted.study };
  return { kind: 'library', id: wanted.model ?? models[0]?.id ?? '' };
}

/** One press makes the study and version 1 of its system; what was typed stays until it is saved. */
export function NewStudyForm(props: Props) {
  const router = useRouter();
  const form = useRef<HTMLFormElement>(null);
  const [id] = useState(() => uuid());
  const [origin, setOrigin] = useState<Origin>(() => firstOrigin(props));
  const [draft, setDraft] = useState<StudyDraft>(() => ({
    ...blank,
    ...suggested(startOf(props, firstOrigin(props))),
  }));
  const [found, setFound] = useState<Record<string, string>>({});
  const { run, pending, problem } = useAction(createStudy, {
    onDone: ({ studyId }) => router.push(`/studies/${studyId}/system`),
  });
  const problems = { ...refusalByField(problem), ...found };
  const fields = {
    draft,
    change: (part: Partial<StudyDraft>) => setDraft((now) => ({ ...now, ...part })),
    problems,
    rigs: props.rigs,
  };
  const choose = (next: Origin) => {
    setOrigin(next);
    fields.change(suggested(startOf(props, next)));
  };
  const submit = async () => {
    const from =
      origin.kind === 'library'
        ? { kind: 'library' as const, modelId: origin.id }
        : { kind: 'study' as const, studyId: origin.id };
    const read = createStudyInput.safeParse({ ...fieldsOf(draft), id, from });
    setFound(read.success ? {} : problemsByField(read.error));
    if (read.success) await run(read.data);
    focusFirstProblem(form.current);
  };
  return (
    <form
      ref={form}
      noValidate
      className="mt-6 flex max-w-[960px] flex-col gap-6"
      onSubmit={(event) => {
        event.preventDefault();
        void submit();
      }}
    >
      <OriginFields
        models={props.models}
        studies={props.studies}
        origin={origin}
        choose={choose}
        problem={problems.from}
      />
      <AboutFields {...fields} />
      <LimitFields {...fields} />
      <ApprovalFields {...fields} />
      <ActionProblem problem={problem} />
      <div>
        <Key kind="filled" type="submit" pending={pending}>
          {pending ? 'Starting the study' : 'Start the study'}
        </Key>
      </div>
    </form>
  );
}
