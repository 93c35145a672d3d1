import type { newestJob } from '@/db/queries/active-job';

/** What a page says of the newest calculation of verdicts: it runs, it failed, or nothing. */
export function followedJob(job: Awaited<ReturnType<typeof newestJob>>) {
  if (!job) return null;
  const { id, state, error } = job;
  if (state === 'queued' || state === 'running') return { id, state: 'running' as const, error };
  return state === 'failed' ? { id, state, error } : null;
}
