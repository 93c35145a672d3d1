import { parentPort, workerData } from 'node:worker_threads';
import { EngineError } from '@/lib/contracts';
import { workOf } from './works';

/** Entry of the calculation thread: one question in, one answer or one error out. */
const { kind, input } = workerData as { kind: keyof typeof workOf; input: unknown };
try {
  const answer = workOf[kind](input, (done, total, stage) =>
    parentPort?.postMessage({ kind: 'progress', done, total, stage }),
  );
  parentPort?.postMessage({ kind: 'answer', answer });
} catch (error) {
  const known = error instanceof EngineError && error.code !== 'internal';
  const where = known && error.at ? ` (at ${error.at})` : '';
  const message = known
    ? `${error.message}${where}`
    : 'The calculation failed for a reason inside the program. Your inputs are kept; tell the lab head.';
  const detail = known
    ? null
    : error instanceof Error
      ? (error.stack ?? error.message)
      : `${error}`;
  parentPort?.postMessage({ kind: 'error', message, detail });
}
