'use client';

import { Check, Select } from '@/components/forms';
import { Plate } from '@/components/ui';
import type { Start } from './new-study-form';

export type Origin = { kind: 'library' | 'study'; id: string };

/** Where the system comes from: a published model with its source, or a study of this lab. */
export function OriginFields(props: {
  models: Start[];
  studies: Start[];
  origin: Origin;
  choose: (origin: Origin) => void;
  problem?: string;
}) {
  const { models, studies, origin, choose, problem } = props;
  const list = origin.kind === 'library' ? models : studies;
  const chosen = list.find((s) => s.id === origin.id);
  return (
    <Plate title="Where its system comes from">
      <div className="flex flex-col gap-4">
        <div className="flex flex-wrap gap-x-6 gap-y-2">
          <Check
            kind="radio"
            id="origin-library"
            name="origin"
            label="A published model"
            checked={origin.kind === 'library'}
            onChange={() => choose({ kind: 'library', id: models[0]?.id ?? '' })}
          />
          <Check
            kind="radio"
            id="origin-study"
            name="origin"
            label="A copy of a study here"
            disabled={studies.length === 0}
            checked={origin.kind === 'study'}
            onChange={() => choose({ kind: 'study', id: studies[0]?.id ?? '' })}
          />
        </div>
        <Select
          id="from"
          label={origin.kind === 'library' ? 'Model' : 'Study'}
          options={list.map((s) => ({ value: s.id, label: s.title }))}
          value={origin.id}
          onChange={(event) => choose({ ...origin, id: event.target.value })}
          problem={problem}
        />
        {chosen?.summary ? <p className="max-w-[640px]">{chosen.summary}</p> : null}
        {chosen?.source ? (
          <p className="max-w-[640px] text-caption text-ink2">Source: {chosen.source}</p>
        ) : null}
      </div>
    </Plate>
  );
}
