import { Problem } from './problem.mjs';
import { isEnding } from './processes.mjs';
import { lastLines } from './supervisor.mjs';

/** Pages can be served without the worker, so its silence delays a start only for so long. */
const workerPatienceSeconds = 15;

/**
 * Waits until the web server says that it and all it needs are well.
 *
 * @param {number} port
 * @param {number} patienceSeconds
 * @param {string} logFile shown when it never does
 */
export async function healthy(port, patienceSeconds, logFile) {
  const until = performance.now() + patienceSeconds * 1000;
  let last = 'no answer';
  let workerSilentSince;
  while (performance.now() < until && !isEnding()) {
    const answer = await ask(port);
    if (answer.well) return;
    if (answer.workerSilent) workerSilentSince ??= performance.now();
    if (performance.now() - (workerSilentSince ?? Infinity) > workerPatienceSeconds * 1000) {
      console.error('  The worker is silent: calculations and mail wait until it answers.');
      return;
    }
    last = answer.text;
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
  if (isEnding()) throw new Problem('Ending.');
  throw new Problem(
    `Swaypoint was not ready in ${patienceSeconds} s (${last}).\n${lastLines(logFile)}\n(${logFile})`,
  );
}

async function ask(port) {
  try {
    const answer = await fetch(`http://127.0.0.1:${port}/api/health`, {
      signal: AbortSignal.timeout(60_000),
    });
    const text = (await answer.text()).slice(0, 300);
    const workerSilent = answer.status === 200 && JSON.parse(text).worker !== 'running';
    return {
      well: answer.status === 200 && !workerSilent,
      workerSilent,
      text: `status ${answer.status}: ${text}`,
    };
  } catch (error) {
    return { well: false, workerSilent: false, text: error.cause?.code ?? error.message };
  }
}
