import { spawn } from 'node:child_process';
import { rmSync } from 'node:fs';
import { join } from 'node:path';
import { readLock } from './lock-file.mjs';
import { freePort } from './ports.mjs';
import { Problem } from './problem.mjs';
import { endProcess, endsWithParent, findProcesses, isEnding } from './processes.mjs';

const patienceSeconds = 600;

/**
 * Starts a complete Swaypoint of its own, as `npm start` does, on free ports.
 *
 * @param {string} root the repository
 * @param {string} dataFolder absolute; used again, it shows what an earlier start left there
 * @returns {Promise<{ url: string, catcherUrl: string, readyMs: number, output: string, stop: () => Promise<{ status: number | null, left: number }> }>}
 */
export async function startInstance(root, dataFolder) {
  if (isEnding()) throw new Problem('Ending.');
  const began = performance.now();
  const port = await freePort();
  const script = join(root, 'scripts', 'start.mjs');
  const [command, args] = endsWithParent(process.execPath, [script]);
  const child = spawn(command, args, {
    cwd: root,
    env: instanceEnvironment(port, dataFolder),
    stdio: ['ignore', 'pipe', 'pipe'],
    detached: true,
  });
  const output = await readyOutput(child);
  const { url, catcherUrl } = readLock(join(dataFolder, 'swaypoint.lock'));
  return {
    url,
    catcherUrl,
    output,
    readyMs: performance.now() - began,
    stop: () => stopInstance(child, dataFolder),
  };
}

/** Ends whatever still runs on a data folder, and removes the folder. */
export async function removeInstance(dataFolder) {
  const lock = readLock(join(dataFolder, 'swaypoint.lock'));
  if (lock !== null) await endProcess(lock.pid, { patienceSeconds: 120 });
  rmSync(dataFolder, { recursive: true, force: true });
}

/** Nothing that the caller configured for a Swaypoint of their own may reach this one. */
function instanceEnvironment(port, dataFolder) {
  const { PUBLIC_URL, SMTP_URL, MAIL_FROM, NODE_ENV, ...rest } = process.env;
  return { ...rest, PORT: String(port), DATA_DIR: dataFolder };
}

function readyOutput(child) {
  let output = '';
  return new Promise((resolve, reject) => {
    const timer = setTimeout(() => {
      child.kill('SIGTERM');
      reject(new Problem(`Swaypoint was not ready in ${patienceSeconds} s.\n${output}`));
    }, patienceSeconds * 1000);
    const take = (part) => {
      output += part;
      if (!output.includes('Ctrl-C ends it')) return;
      clearTimeout(timer);
      resolve(output);
    };
    child.stdout.setEncoding('utf8').on('data', take);
    child.stderr.setEncoding('utf8').on('data', take);
    child.once('exit', (status) => {
      clearTimeout(timer);
      reject(new Problem(`Swaypoint ended with status ${status} before it was ready.\n${output}`));
    });
  });
}

async function stopInstance(child, dataFolder) {
  const exited =
    child.exitCode === null && child.signalCode === null
      ? new Promise((resolve) => child.once('exit', resolve))
      : child.exitCode;
  await endProcess(child.pid, { patienceSeconds: 120 });
  return { status: await exited, left: findProcesses([dataFolder]).length };
}
