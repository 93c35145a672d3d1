import { Worker } from 'node:worker_threads';
import type { Db } from '@/db/client';
import { log } from '../log';
import { JobRefused } from './kind';
import { fail, finish, heartbeat, type Job } from './queue';
import { storeOf } from './stores';

const BEAT_MS = 700;
const LONGEST_MS = 15 * 60_000;

/** What people are told; the detail, with its paths, goes to the log alone. */
const WORDS = {
  long: 'The calculation took longer than 15 minutes and was ended. Ask for less at once, such as fewer draws or levels.',
  broken:
    'The calculation broke off without an answer. Your inputs are kept; ask again, and tell the lab head if it happens twice.',
  unstored: 'The result could not be stored. Your inputs are kept; ask again.',
};

type Message =
  | { kind: 'progress'; done: number; total: number; stage: string }
  | { kind: 'answer'; answer: unknown }
  | { kind: 'error'; message: string; detail: string | null };

type Outcome =
  | { outcome: 'answered'; answer: unknown }
  | { outcome: 'failed'; message: string }
  | { outcome: 'taken away' };

/** Works one job in its own thread, beating while it runs; the thread dies with a cancel. */
function workInThread(db: Db, job: Job, owner: string, threadFile: string): Promise<Outcome> {
  return new Promise((resolve) => {
    const thread = new Worker(threadFile, { workerData: { kind: job.kind, input: job.input } });
    const state = { done: 0, total: 0, stage: '' };
    const began = Date.now();
    let over = false;
    const end = (outcome: Outcome) => {
      if (over) return;
      over = true;
      clearInterval(timer);
      void thread.terminate();
      resolve(outcome);
    };
    const beat = async () => {
      if (Date.now() - began > LONGEST_MS) {
        end({ outcome: 'failed', message: WORDS.long });
        return;
      }
      const held = await heartbeat(db, { id: job.id, owner, now: new Date(), ...state }).catch(
        () => true,
      );
      if (!held) end({ outcome: 'taken away' });
    };
    const timer = setInterval(() => void beat(), BEAT_MS);
    thread.on('message', (message: Message) => {
      if (message.kind === 'progress') Object.assign(state, message);
      else if (message.kind === 'answer') end({ outcome: 'answered', answer: message.answer });
      else {
        if (message.detail)
          log.error({ detail: message.detail, kind: job.kind }, 'a calculation failed inside');
        end({ outcome: 'failed', message: message.message });
      }
    });
    thread.on('error', (error) => {
      log.error({ err: error, kind: job.kind }, 'the thread of a calculation broke off');
      end({ outcome: 'failed', message: WORDS.broken });
    });
    thread.on('exit', () => end({ outcome: 'failed', message: WORDS.broken }));
  });
}

/** Runs a claimed job to its end: result and end of job are stored in one transaction. */
export async function runJob(db: Db, job: Job, owner: string, threadFile: string): Promise<void> {
  const worked = await workInThread(db, job, owner, threadFile);
  if (worked.outcome === 'taken away') return;
  if (worked.outcome === 'failed') {
    await fail(db, { id: job.id, owner, now: new Date(), error: worked.message });
    return;
  }
  try {
    const now = new Date();
    await db.transaction(async (tx) => {
      const resultId = await storeOf[job.kind](tx, job, worked.answer, now);
      const ours = await finish(tx, { id: job.id, owner, now, resultId });
      if (!ours) tx.rollback();
    });
  } catch (error) {
    const refused = error instanceof JobRefused;
    if (!refused) log.error({ err: error, kind: job.kind }, 'storing a result failed');
    const message = refused ? error.message : WORDS.unstored;
    await fail(db, { id: job.id, owner, now: new Date(), error: message });
  }
}
