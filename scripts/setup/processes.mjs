import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { closeSync, existsSync, openSync, readdirSync, readFileSync } from 'node:fs';
import { Problem } from './problem.mjs';

const sleep = (milliseconds) => new Promise((resolve) => setTimeout(resolve, milliseconds));

let ending = false;
const commands = new Set();
const finishing = new Set();

/** Whether this process is on its way out, and starts nothing any more. */
export function isEnding() {
  return ending;
}

/**
 * From now on nothing is started. The commands under way are asked to end, save those that must not
 * be cut short; these are waited for.
 */
export async function endCommands() {
  ending = true;
  for (const child of commands) child.kill('SIGTERM');
  await Promise.all([...finishing].map((child) => once(child, 'exit')));
}

/**
 * Runs a command to its end.
 *
 * @param {string} command
 * @param {string[]} args
 * @param {{ cwd?: string, env?: NodeJS.ProcessEnv, logFile?: string, finishes?: boolean }} options
 *   with `logFile` the output goes there, otherwise it is shown; with `finishes` the command is let
 *   to its end even when we are ended.
 * @returns {Promise<number>} exit status; 127 when the command cannot be started
 */
export async function run(command, args, options = {}) {
  const output = options.logFile === undefined ? 'inherit' : openSync(options.logFile, 'a', 0o600);
  try {
    return (await runTo(command, args, options, output)).status;
  } finally {
    if (output !== 'inherit') closeSync(output);
  }
}

/** Runs a command and gives what it wrote; its complaints are shown. */
export function runForOutput(command, args, options = {}) {
  return runTo(command, args, options, 'pipe');
}

function runTo(command, args, { cwd, env, finishes = false }, output) {
  if (ending) throw new Problem('Ending.');
  const [program, words] = finishes ? [command, args] : endsWithParent(command, args);
  const child = spawn(program, words, {
    cwd,
    env: env ?? process.env,
    stdio: ['ignore', output, output === 'pipe' ? 'inherit' : output],
  });
  const set = finishes ? finishing : commands;
  set.add(child);
  let written = '';
  child.stdout?.setEncoding('utf8').on('data', (part) => {
    written += part;
  });
  return new Promise((resolve) => {
    const end = (status) => {
      set.delete(child);
      resolve({ status, output: written });
    };
    child.once('error', () => end(127));
    child.once('close', (code) => end(code ?? 1));
  });
}

/** Path of a program, looked for on PATH and where Debian keeps servers; null when absent. */
export function findProgram(name) {
  const folders = [
    ...(process.env.PATH ?? '').split(':'),
    '/usr/sbin',
    '/usr/local/sbin',
    '/usr/bin',
  ];
  const paths = folders.filter((folder) => folder !== '').map((folder) => `${folder}/${name}`);
  return paths.find((path) => existsSync(path)) ?? null;
}

/**
 * Names one process for good: its number may be given out again, its number with the moment it
 * started may not. Null when no such process lives.
 */
export function processIdentity(pid) {
  try {
    const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
    // The second field is the program's name in parentheses and may itself hold spaces.
    const fields = stat.slice(stat.lastIndexOf(')') + 2).split(' ');
    if (fields[0] === 'Z' || fields[0] === 'X') return null;
    const boot = readFileSync('/proc/sys/kernel/random/boot_id', 'utf8').trim();
    return `${boot}/${pid}/${fields[19]}`;
  } catch {
    return null;
  }
}

/** Whether the process that an identity was taken from still lives. */
export function isSameProcess(pid, identity) {
  return identity !== null && processIdentity(pid) === identity;
}

/** Numbers of the living processes that were started with all of these words in their command. */
export function findProcesses(words) {
  return readdirSync('/proc')
    .filter((name) => /^\d+$/.test(name))
    .map(Number)
    .filter((pid) => {
      try {
        const command = readFileSync(`/proc/${pid}/cmdline`, 'utf8').replaceAll('\0', ' ');
        return words.every((word) => command.includes(word)) && processIdentity(pid) !== null;
      } catch {
        return false;
      }
    });
}

/**
 * Ends a process that need not be our child: asks, waits, and after that insists.
 *
 * @param {number} pid
 * @param {{ patienceSeconds?: number }} options
 * @returns {Promise<'ended' | 'killed'>}
 */
export async function endProcess(pid, { patienceSeconds = 30 } = {}) {
  const identity = processIdentity(pid);
  if (identity === null) return 'ended';
  signalProcess(pid, 'SIGTERM');
  const until = performance.now() + patienceSeconds * 1000;
  while (performance.now() < until) {
    if (!isSameProcess(pid, identity)) return 'ended';
    await sleep(50);
  }
  signalProcess(pid, 'SIGKILL');
  for (let tries = 0; tries < 100 && isSameProcess(pid, identity); tries += 1) await sleep(50);
  if (isSameProcess(pid, identity)) throw new Problem(`Process ${pid} cannot be ended.`);
  return 'killed';
}

function signalProcess(pid, signal) {
  try {
    process.kill(pid, signal);
  } catch (error) {
    if (error.code === 'EPERM') {
      throw new Problem(`Process ${pid} belongs to another user; please end it, then try again.`);
    }
    if (error.code !== 'ESRCH') throw error;
  }
}

/**
 * Words to put before a command so that it is asked to end should the process that started it die,
 * even by a kill -9.
 */
export function endsWithParent(command, args) {
  const setpriv = findProgram('setpriv');
  return setpriv === null
    ? [command, args]
    : [setpriv, ['--pdeathsig', 'TERM', '--', command, ...args]];
}
