import { randomUUID } from 'node:crypto';
import { fileURLToPath } from 'node:url';
import { workerBeat } from '@/db/schema';
import { closeDatabase, database } from '@/lib/server/database';
import { claim } from '@/lib/server/jobs/queue';
import { runJob } from '@/lib/server/jobs/run-job';
import { log } from '@/lib/server/log';
import { deliverNext, mailTransport } from '@/lib/server/outbox/deliver';

/**
 * The one worker: takes calculations from the queue, each in a thread of its own, and sends what is
 * due from the outbox. Both loops go on by themselves when the database or the mail server is away.
 */
const owner = randomUUID();
const threadFile = fileURLToPath(new URL('./job-thread.mjs', import.meta.url));
const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));
let ending = false;

async function loop(name: string, idleMs: number, step: () => Promise<boolean>): Promise<void> {
  while (!ending) {
    try {
      if (!(await step())) await pause(idleMs);
    } catch (error) {
      log.warn({ loop: name, reason: (error as Error).message }, 'trying again');
      await pause(2000);
    }
  }
}

async function calculate(): Promise<boolean> {
  const job = await claim(database(), owner, new Date());
  if (!job) return false;
  await runJob(database(), job, owner, threadFile);
  return true;
}

async function beat(): Promise<boolean> {
  const at = new Date();
  await database()
    .insert(workerBeat)
    .values({ id: 'worker', at, pid: process.pid })
    .onDuplicateKeyUpdate({ set: { at, pid: process.pid } });
  return false;
}

const transport = mailTransport();
for (const signal of ['SIGTERM', 'SIGINT'] as const) {
  process.on(signal, () => {
    ending = true;
    setTimeout(() => process.exit(0), 3000).unref();
  });
}
await Promise.all([
  loop('beat', 3000, beat),
  loop('jobs', 400, calculate),
  loop(
    'outbox',
    1000,
    async () => (await deliverNext(database(), transport, new Date())) !== 'idle',
  ),
]);
transport.close();
await closeDatabase();
