import { spawn } from 'node:child_process';
import { createHash } from 'node:crypto';
import {
  chmodSync,
  existsSync,
  mkdirSync,
  openSync,
  renameSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import { connect } from 'node:net';
import { tmpdir, userInfo } from 'node:os';
import { join } from 'node:path';
import { freePort } from './ports.mjs';
import { Problem } from './problem.mjs';
import {
  endProcess,
  endsWithParent,
  findProcesses,
  findProgram,
  isEnding,
  run,
} from './processes.mjs';

/** Longest path of a Unix socket that Linux accepts. */
const socketPathLimit = 107;
const startPatienceSeconds = 60;
const stopPatienceSeconds = 90;

/**
 * A private MariaDB: everything it has is in one folder, it listens on 127.0.0.1 alone, and nobody
 * gets in without the password.
 *
 * @typedef {{ folder: string, data: string, options: string, log: string, socketFolder: string, socket: string }} Places
 * @param {string} folder absolute
 * @returns {Places}
 */
export function mariadbPlaces(folder) {
  const near = join(folder, 'run');
  const far = join(tmpdir(), `swaypoint-${userInfo().uid}-${shortHash(folder)}`);
  const fits = Buffer.byteLength(join(near, 'db.sock')) <= socketPathLimit;
  const socketFolder = fits ? near : far;
  return {
    folder,
    data: join(folder, 'data'),
    options: join(folder, 'mariadb.cnf'),
    log: join(folder, 'mariadb.log'),
    socketFolder,
    socket: join(socketFolder, 'db.sock'),
  };
}

const shortHash = (text) => createHash('sha256').update(text).digest('hex').slice(0, 12);

/**
 * Starts the private MariaDB of a folder, creating it on first use.
 *
 * @param {string} folder absolute path
 * @param {{ password: string, port?: number, databases: string[], user: string, durable?: boolean }} settings
 *   `durable: false` is for tests: a crash of the machine may lose the database.
 * @returns {Promise<{ host: '127.0.0.1', port: number, child: import('node:child_process').ChildProcess, places: Places }>}
 */
export async function startMariadb(folder, settings) {
  const places = mariadbPlaces(folder);
  for (const path of [places.folder, places.socketFolder]) {
    mkdirSync(path, { recursive: true, mode: 0o700 });
    chmodSync(path, 0o700);
  }
  await endOrphanMariadb(folder);
  const port = await freePort(settings.port);
  writeFileSync(places.options, optionsText(places, port, settings), { mode: 0o600 });
  const firstWords = join(folder, 'grants.sql');
  rmSync(firstWords, { force: true });
  writeFileSync(firstWords, grantsText(settings), { mode: 0o600 });
  await initialise(places);
  const child = spawnServer(places, firstWords);
  try {
    await answering(child, places, port);
  } finally {
    rmSync(firstWords, { force: true });
  }
  return { host: '127.0.0.1', port, child, places };
}

/** Shuts the server down cleanly. @returns {Promise<'ended' | 'killed'>} */
export async function stopMariadb({ child, places }) {
  const end =
    child.exitCode === null && child.signalCode === null
      ? await endProcess(child.pid, { patienceSeconds: stopPatienceSeconds })
      : 'ended';
  if (places.socketFolder !== join(places.folder, 'run')) {
    rmSync(places.socketFolder, { recursive: true, force: true });
  }
  return end;
}

/** Shuts down a server that a killed predecessor left running on this folder. */
export async function endOrphanMariadb(folder) {
  const places = mariadbPlaces(folder);
  for (const pid of findProcesses(['mariadbd', `--defaults-file=${places.options} `])) {
    await endProcess(pid, { patienceSeconds: stopPatienceSeconds });
  }
}

async function initialise(places) {
  if (existsSync(places.data)) return;
  const program = findProgram('mariadb-install-db');
  if (program === null) throw new Problem('mariadb-install-db is missing (mariadb-server-core).');
  // Made beside its place and moved there when complete: an interrupted start leaves no half database.
  const draft = `${places.data}.new`;
  rmSync(draft, { recursive: true, force: true });
  mkdirSync(draft, { mode: 0o700 });
  const args = [
    `--defaults-file=${places.options}`,
    `--datadir=${draft}`,
    '--auth-root-authentication-method=normal',
    '--skip-test-db',
    '--skip-name-resolve',
  ];
  if (userInfo().uid === 0) args.push('--user=root');
  const status = await run(program, args, { logFile: places.log, env: serverEnvironment() });
  if (status !== 0) throw new Problem(`MariaDB could not be set up; see ${places.log}.`);
  renameSync(draft, places.data);
}

function spawnServer(places, firstWords) {
  const program = findProgram('mariadbd');
  if (program === null) throw new Problem('mariadbd is missing (mariadb-server-core).');
  if (isEnding()) throw new Problem('Ending.');
  const log = openSync(places.log, 'a', 0o600);
  const args = [`--defaults-file=${places.options}`, `--init-file=${firstWords}`];
  const [command, words] = endsWithParent(program, args);
  // A session of its own: Ctrl-C at the terminal must not reach the database before its clients end.
  return spawn(command, words, {
    stdio: ['ignore', log, log],
    detached: true,
    env: serverEnvironment(),
  });
}

/** MariaDB takes the modes of the files it makes from here, not from the umask. */
function serverEnvironment() {
  return { ...process.env, UMASK: '0600', UMASK_DIR: '0700', TZ: 'UTC' };
}

async function answering(child, places, port) {
  let failed = false;
  child.once('error', () => {
    failed = true;
  });
  const until = performance.now() + startPatienceSeconds * 1000;
  while (performance.now() < until) {
    if (failed || child.exitCode !== null || child.signalCode !== null) {
      throw new Problem(`MariaDB ended while starting; see ${places.log}.`);
    }
    if (existsSync(places.socket) && (await greets(port))) return;
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
  await endProcess(child.pid);
  throw new Problem(`MariaDB did not answer in ${startPatienceSeconds} s; see ${places.log}.`);
}

/** The server speaks first, and does so only once its initial statements have run. */
function greets(port) {
  return new Promise((resolve) => {
    const socket = connect({ port, host: '127.0.0.1' });
    const end = (answer) => {
      socket.destroy();
      resolve(answer);
    };
    socket.setTimeout(2000, () => end(false));
    socket.once('error', () => end(false));
    socket.once('data', () => end(true));
  });
}

function grantsText({ user, password, databases }) {
  const secret = `'${password.replaceAll("'", "''")}'`;
  const lines = [
    `ALTER USER 'root'@'localhost' IDENTIFIED BY ${secret};`,
    // A new database has further roots, without password, for 127.0.0.1 and the machine's name.
    `DELETE FROM mysql.global_priv WHERE User = '' OR (User = 'root' AND Host <> 'localhost');`,
    `DELETE FROM mysql.proxies_priv WHERE Host <> 'localhost';`,
    'FLUSH PRIVILEGES;',
  ];
  for (const host of ['127.0.0.1', 'localhost']) {
    lines.push(`CREATE USER IF NOT EXISTS '${user}'@'${host}';`);
    lines.push(`ALTER USER '${user}'@'${host}' IDENTIFIED BY ${secret};`);
  }
  for (const name of databases) {
    lines.push(
      `CREATE DATABASE IF NOT EXISTS \`${name}\` CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_ci;`,
    );
    for (const host of ['127.0.0.1', 'localhost']) {
      lines.push(`GRANT ALL ON \`${name}\`.* TO '${user}'@'${host}';`);
    }
  }
  return `${lines.join('\n')}\n`;
}

/** For databases that are thrown away: nothing waits for the disk. */
const forgetful = `innodb-flush-log-at-trx-commit = 0
innodb-flush-method = nosync
innodb-doublewrite = 0
sync-frm = 0
`;

function optionsText(places, port, { user, password, durable = true }) {
  return `# Written at each start.
[mariadbd]
datadir = ${places.data}
socket = ${places.socket}
pid-file = ${join(places.socketFolder, 'db.pid')}
port = ${port}
bind-address = 127.0.0.1
skip-name-resolve
local-infile = 0
symbolic-links = 0
character-set-server = utf8mb4
collation-server = utf8mb4_unicode_ci
default-time-zone = +00:00
default-storage-engine = InnoDB
sql-mode = STRICT_ALL_TABLES,NO_ZERO_DATE,NO_ZERO_IN_DATE,ERROR_FOR_DIVISION_BY_ZERO,NO_ENGINE_SUBSTITUTION
max-connections = 80
table-open-cache = 400
open-files-limit = 2000
max-allowed-packet = 64M
innodb-buffer-pool-size = 64M
innodb-log-file-size = 32M
innodb-log-buffer-size = 4M
key-buffer-size = 1M
aria-pagecache-buffer-size = 8M
query-cache-type = 0
query-cache-size = 0
performance-schema = 0
${durable ? '' : forgetful}${userInfo().uid === 0 ? 'user = root\n' : ''}
[client]
socket = ${places.socket}
user = ${user}
password = "${password}"
default-character-set = utf8mb4
`;
}
