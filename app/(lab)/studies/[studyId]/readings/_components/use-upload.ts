'use client';

import { useRouter } from 'next/navigation';
import { useCallback, useRef, useState } from 'react';
import type { Problem } from '@/lib/contracts';
import type { UploadAccount, UploadMapping } from '@/lib/contracts/forms/readings';

export type Refusal = { problem: Problem; rows: UploadAccount['problems'] };
export type Sent =
  | { state: 'idle' }
  | { state: 'sending' }
  | { state: 'kept'; account: UploadAccount }
  | { state: 'refused'; refusal: Refusal };

const noAnswer: Refusal = {
  problem: {
    code: 'unavailable',
    message: 'The server did not answer. Nothing was kept.',
    mend: 'Check the network and upload again; the same file is never kept twice.',
  },
  rows: [],
};

async function answerOf(response: Response): Promise<Sent> {
  const body = (await response.json().catch(() => null)) as Record<string, unknown> | null;
  if (response.ok && body) {
    return { state: 'kept', account: body as unknown as UploadAccount };
  }
  if (!body) return { state: 'refused', refusal: noAnswer };
  const { code, message, at, mend, problems } = body as unknown as Problem & {
    problems?: UploadAccount['problems'];
  };
  return {
    state: 'refused',
    refusal: { problem: { code, message, at, mend }, rows: problems ?? [] },
  };
}

/** Sends one file at a time: a second press while it goes does nothing. */
export function useUpload(studyId: string) {
  const router = useRouter();
  const [sent, setSent] = useState<Sent>({ state: 'idle' });
  const busy = useRef(false);
  const send = useCallback(
    async (of: { file: File; runId: string; mapping: UploadMapping }) => {
      if (busy.current) return;
      busy.current = true;
      setSent({ state: 'sending' });
      const form = new FormData();
      form.set('runId', of.runId);
      form.set('mapping', JSON.stringify(of.mapping));
      form.set('file', of.file);
      try {
        const response = await fetch(`/api/v1/studies/${studyId}/uploads`, {
          method: 'POST',
          body: form,
        });
        const answer = await answerOf(response);
        setSent(answer);
        if (answer.state === 'kept') router.refresh();
      } catch {
        setSent({ state: 'refused', refusal: noAnswer });
      } finally {
        busy.current = false;
      }
    },
    [router, studyId],
  );
  return { sent, send, clear: useCallback(() => setSent({ state: 'idle' }), []) };
}
