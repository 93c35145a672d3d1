'use client';

import { useEffect, useState } from 'react';

export type JobView = {
  id: string;
  kind: string;
  state: 'queued' | 'running' | 'done' | 'failed' | 'cancelled';
  done: number;
  total: number;
  stage: string;
  error: string | null;
  resultId: string | null;
};

const POLL_MS = 700;
const POLL_HIDDEN_MS = 5000;
const ended = new Set(['done', 'failed', 'cancelled']);

/**
 * Follows a calculation until it ends. A poll that fails is tried again: the job goes on in the
 * worker whatever the network does. `onEnd` is called once.
 */
export function useJob(jobId: string | null, onEnd?: (job: JobView) => void): JobView | null {
  const [job, setJob] = useState<JobView | null>(null);
  useEffect(() => {
    setJob(null);
    if (!jobId) return;
    let stopped = false;
    let timer: ReturnType<typeof setTimeout>;
    const poll = async () => {
      const response = await fetch(`/api/v1/jobs/${jobId}`).catch(() => null);
      if (stopped) return;
      if (response?.ok) {
        const next = (await response.json()) as JobView;
        if (stopped) return;
        setJob(next);
        if (ended.has(next.state)) {
          onEnd?.(next);
          return;
        }
      }
      timer = setTimeout(poll, document.hidden ? POLL_HIDDEN_MS : POLL_MS);
    };
    void poll();
    return () => {
      stopped = true;
      clearTimeout(timer);
    };
  }, [jobId, onEnd]);
  return job;
}
