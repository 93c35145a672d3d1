import type { Transaction } from '@/db/client';
import type { Job } from './queue';

/** A refusal whose words are for the person who asked. */
export class JobRefused extends Error {}

/** Stores an answer inside the transaction that also ends the job; returns the id of what it made. */
export type Store = (
  tx: Transaction,
  job: Job,
  answer: unknown,
  now: Date,
) => Promise<string | null>;

/** Works a question out in a thread that can be killed; touches nothing but its input. */
export type Work = (
  input: unknown,
  progress: (done: number, total: number, stage: string) => void,
) => unknown;
