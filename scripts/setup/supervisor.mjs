import { spawn } from 'node:child_process';
import { openSync, readFileSync, renameSync, statSync } from 'node:fs';
import { endProcess, endsWithParent, isEnding, processIdentity } from './processes.mjs';
import { say } from './progress.mjs';

const longestPauseSeconds = 30;
/** A child that lasted this long had started well: the next pause is short again. */
const steadySeconds = 60;
const largestLogBytes = 5_000_000;

/**
 * Keeps the children of one start running and ends them together.
 *
 * @typedef {{ name: string, script: string, args: string[], env: NodeJS.ProcessEnv, cwd: string, logFile: string, vital: boolean, shown?: boolean, patienceSeconds: number }} Child
 *   `vital`: its death ends everything; any other child is started again after a pause.
 *   `shown`: its output goes to the terminal instead of the log.
 */
export class Supervisor {
  #running = new Map();
  #pauses = new Map();
  #onVitalDeath;
  #onChange;

  /**
   * @param {(child: Child, how: string) => void} onVitalDeath
   * @param {() => void} onChange called when the list of running children changed
   */
  constructor(onVitalDeath, onChange) {
    this.#onVitalDeath = onVitalDeath;
    this.#onChange = onChange;
  }

  /** Names and numbers of the living children. */
  list() {
    return [...this.#running].map(([name, { process: child }]) => ({
      name,
      pid: child.pid,
      identity: processIdentity(child.pid),
    }));
  }

  /** @param {Child} child */
  start(child) {
    if (isEnding()) return;
    shorten(child.logFile);
    const log = openSync(child.logFile, 'a', 0o600);
    const [command, words] = endsWithParent(process.execPath, [child.script, ...child.args]);
    const output = child.shown ? 'inherit' : log;
    const started = spawn(command, words, {
      cwd: child.cwd,
      env: child.env,
      stdio: ['ignore', output, output],
      // Ctrl-C reaches start alone, which then ends its children in order.
      detached: true,
    });
    this.#running.set(child.name, { process: started, patienceSeconds: child.patienceSeconds });
    const began = performance.now();
    started.once('error', () => this.#died(child, 'could not be started', began));
    started.once('exit', (code, signal) =>
      this.#died(
        child,
        signal === null ? `ended with status ${code}` : `was ended by ${signal}`,
        began,
      ),
    );
    this.#onChange();
  }

  /** Asks the named children to end and waits for them; after their patience they are killed. */
  async stop(...names) {
    const ends = names.map(async (name) => {
      clearTimeout(this.#pauses.get(name)?.timer);
      const running = this.#running.get(name);
      if (running === undefined) return;
      const { process: child, patienceSeconds } = running;
      const end = await endProcess(child.pid, { patienceSeconds });
      if (end === 'killed') say(`${name} did not end in ${patienceSeconds} s and was killed`);
    });
    await Promise.all(ends);
  }

  #died(child, how, began) {
    if (!this.#running.delete(child.name) || isEnding()) return;
    this.#onChange();
    if (child.vital) {
      this.#onVitalDeath(child, how);
      return;
    }
    const steady = performance.now() - began > steadySeconds * 1000;
    const last = steady ? 0.5 : (this.#pauses.get(child.name)?.seconds ?? 0.5);
    const seconds = Math.min(last * 2, longestPauseSeconds);
    console.error(
      `\n  The ${child.name} ${how} (see ${child.logFile}); starting it again in ${seconds} s.`,
    );
    const timer = setTimeout(() => this.start(child), seconds * 1000);
    this.#pauses.set(child.name, { timer, seconds });
  }
}

/** The last lines of a log, to show why something ended. */
export function lastLines(path, count = 15) {
  try {
    return readFileSync(path, 'utf8').trimEnd().split('\n').slice(-count).join('\n');
  } catch {
    return '';
  }
}

function shorten(path) {
  try {
    if (statSync(path).size > largestLogBytes) renameSync(path, `${path}.1`);
  } catch (error) {
    if (error.code !== 'ENOENT') throw error;
  }
}
