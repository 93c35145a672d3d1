'use client';

import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { v7 as uuid } from 'uuid';
import { useAction } from '@/components/forms';
import type { Control, SystemModel } from '@/lib/contracts';
import type { FieldProblem } from '@/lib/contracts/forms/system';
import { saveSystem } from '../actions';
import { draftOf, type SystemDraft } from './draft';
import { systemOf } from './draft-to-system';

export type SystemFormStart = {
  studyId: string;
  number: number;
  model: SystemModel;
  control: Control;
};

/** What the system form holds, and how it is saved. */
export function useSystemForm({ studyId, number, model, control }: SystemFormStart) {
  const router = useRouter();
  const [id, setId] = useState(() => uuid());
  const [draft, setDraft] = useState<SystemDraft>(() => draftOf(model, control));
  const [reason, setReason] = useState('');
  const [found, setFound] = useState<FieldProblem[]>([]);
  const [saved, setSaved] = useState<number | null>(null);
  // Held from when the draft was filled: the page may learn of a newer version while somebody types.
  const [basedOn, setBasedOn] = useState(number);
  const { run, pending, problem } = useAction(saveSystem, {
    onDone: (result) => {
      if (result.outcome === 'to mend') return setFound(result.problems);
      setSaved(result.number);
      setBasedOn(result.number);
      setReason('');
      setId(uuid());
      router.refresh();
    },
  });
  const change = (part: Partial<SystemDraft>) => {
    setSaved(null);
    setDraft((now) => ({ ...now, ...part }));
  };
  const submit = async () => {
    const read = systemOf(draft);
    const noReason = reason.trim() ? [] : [{ at: 'reason', message: 'Say what changed and why' }];
    const all = [...(read.ok ? [] : read.problems), ...noReason];
    setFound(all);
    if (!read.ok || all.length > 0) return;
    await run({ id, studyId, basedOn, model: read.model, control: read.control, reason });
  };
  return { draft, change, reason, setReason, found, problem, pending, saved, submit };
}
