import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { ensureBuilt } from './build.mjs';
import { childEnvironment, databaseName, databaseUser } from './configuration.mjs';
import { prepareDataFolder, readPorts, readSecrets, savePorts } from './data-folder.mjs';
import { ensureDependencies } from './dependencies.mjs';
import { healthy } from './health.mjs';
import { giveLockBack, takeLock, updateLock } from './lock-file.mjs';
import { endOrphanMariadb, startMariadb, stopMariadb } from './mariadb.mjs';
import { freePort, isPortFree } from './ports.mjs';
import { Problem } from './problem.mjs';
import { endCommands, endProcess, isEnding, isSameProcess, runForOutput } from './processes.mjs';
import { say, step } from './progress.mjs';
import { readyText } from './ready-text.mjs';
import { lastLines, Supervisor } from './supervisor.mjs';
import { ensureMariadb } from './system-packages.mjs';

/** Longest wait for a predecessor that is shutting its database down. */
const endPatienceSeconds = 120;

/** One running Swaypoint: a data folder, its database, the web server, the worker, the mail catcher. */
export class Installation {
  #root;
  #configuration;
  #lock;
  #locked = false;
  #ending = false;
  #mariadb = null;
  #catcher = null;
  #supervisor;

  /**
   * @param {string} root the repository
   * @param {ReturnType<import('./configuration.mjs').readConfiguration>} configuration
   * @param {(problem: Problem) => void} onFailure called when something dies that all depends on
   */
  constructor(root, configuration, onFailure) {
    this.#root = root;
    this.#configuration = configuration;
    this.#lock = join(configuration.dataFolder, 'swaypoint.lock');
    this.onFailure = onFailure;
    const onVitalDeath = ({ name, logFile }, how) =>
      onFailure(new Problem(`The ${name} ${how}.\n${lastLines(logFile)}\n(${logFile})`));
    this.#supervisor = new Supervisor(onVitalDeath, () => this.#record());
  }

  /** Brings everything up and says so. @throws Problem */
  async start() {
    const { dataFolder, development } = this.#configuration;
    prepareDataFolder(dataFolder);
    await this.#takeFolder();
    await this.#checkPort();
    await ensureMariadb();
    await ensureDependencies(this.#root);
    const key = await ensureBuilt(this.#root, { development });
    // From here on all that is written is data: readable by its owner alone.
    process.umask(0o077);
    const secrets = readSecrets(dataFolder);
    const ports = await this.#choosePorts();
    await step('Starting the database', () => this.#startDatabase(secrets, ports));
    if (this.#configuration.smtpUrl === undefined) this.#startCatcher(ports);
    const environment = childEnvironment(this.#configuration, {
      database: this.#mariadb,
      secrets,
      catcher: this.#catcher,
    });
    const prepared = await this.#serve(environment, key);
    console.log(readyText(this.#configuration, this.#catcher, prepared));
  }

  /** Ends everything in order: those who write first, the database last. */
  async stop() {
    this.#ending = true;
    this.#record();
    await endCommands();
    await this.#supervisor.stop('web server', 'worker');
    await this.#supervisor.stop('mail catcher');
    if (!this.#locked) return;
    if (this.#mariadb !== null) await stopMariadb(this.#mariadb);
    await endOrphanMariadb(this.#databaseFolder());
    giveLockBack(this.#lock);
    if (this.#mariadb !== null) say('everything has ended; all data are kept');
  }

  async #takeFolder() {
    const lock = await takeLockAfterEnd(this.#lock, this.#facts());
    if (!lock.taken) {
      throw new Problem(
        `Swaypoint is already running on ${this.#configuration.dataFolder} (process ${lock.holder.pid}, ${lock.holder.url}).\n` +
          `End it with Ctrl-C where it runs, or with: kill ${lock.holder.pid}\n` +
          'A second one needs a data folder and a port of its own: DATA_DIR=.data-two PORT=3100 npm start',
      );
    }
    this.#locked = true;
    const left = (lock.previous?.children ?? []).filter(({ pid, identity }) =>
      isSameProcess(pid, identity),
    );
    if (lock.previous !== null) say('the last start did not end properly: putting that right');
    for (const { pid } of left) await endProcess(pid, { patienceSeconds: 10 });
    await endOrphanMariadb(this.#databaseFolder());
  }

  async #checkPort() {
    const { port } = this.#configuration;
    if (await isPortFree(port)) return;
    throw new Problem(
      `Port ${port} is in use by another program. Choose another with PORT, for example: PORT=${port + 100} npm start`,
    );
  }

  async #choosePorts() {
    const { port, dataFolder } = this.#configuration;
    const saved = readPorts(dataFolder);
    const ports = {
      database: await freePort(saved.database),
      smtp: await freePort(port + 25),
      mail: await freePort(port + 26),
    };
    savePorts(dataFolder, ports);
    return ports;
  }

  async #startDatabase({ databasePassword }, ports) {
    this.#mariadb = await startMariadb(this.#databaseFolder(), {
      user: databaseUser,
      password: databasePassword,
      databases: [databaseName],
      port: ports.database,
    });
    const { child, places } = this.#mariadb;
    const died = () => {
      if (isEnding()) return;
      this.onFailure(new Problem(`The database ended.\n${lastLines(places.log)}\n(${places.log})`));
    };
    if (child.exitCode !== null || child.signalCode !== null) died();
    else child.once('exit', died);
  }

  /** Prepares the database and starts the servers: side by side when these very sources did so before. */
  async #serve(environment, key) {
    const mark = join(this.#databaseFolder(), 'prepared-for');
    const known = existsSync(mark) && readFileSync(mark, 'utf8') === key;
    if (!known) {
      const text = 'Bringing the database up to date, with a demo lab in a new one';
      const prepared = await step(text, () => this.#prepareDatabase(environment));
      writeFileSync(mark, key);
      await this.#startServers(environment);
      return prepared;
    }
    const servers = this.#startServers(environment);
    const [prepared] = await Promise.all([this.#prepareDatabase(environment), servers]);
    return prepared;
  }

  async #prepareDatabase(environment) {
    const script = join(this.#root, 'dist', 'prepare-database.mjs');
    // A change of tables that is cut short cannot be taken back.
    const options = { cwd: this.#root, env: environment, finishes: true };
    const { status, output } = await runForOutput(process.execPath, [script], options);
    if (status !== 0) throw new Problem('The database could not be prepared; see above.');
    return JSON.parse(output.trim().split('\n').at(-1));
  }

  async #startServers(environment) {
    const { port, development } = this.#configuration;
    await this.#checkPort();
    await step('Starting the web server and the worker', async () => {
      this.#startWebAndWorker(environment);
      await healthy(port, development ? 180 : 60, this.#logFile('web server'));
    });
  }

  #startCatcher({ smtp, mail }) {
    this.#catcher = { smtpUrl: `smtp://127.0.0.1:${smtp}`, url: `http://127.0.0.1:${mail}` };
    const folder = join(this.#configuration.dataFolder, 'mail');
    this.#startChild('mail catcher', {
      script: join(this.#root, 'dist', 'mail-catcher.mjs'),
      args: ['--folder', folder, '--smtp-port', String(smtp), '--web-port', String(mail)],
      env: process.env,
      patienceSeconds: 3,
    });
  }

  #startWebAndWorker(environment) {
    const { port, development } = this.#configuration;
    this.#startChild('worker', {
      script: join(this.#root, 'dist', 'worker.mjs'),
      args: [],
      env: environment,
      patienceSeconds: 10,
    });
    this.#startChild('web server', {
      script: join(this.#root, 'node_modules', 'next', 'dist', 'bin', 'next'),
      args: [development ? 'dev' : 'start', '--hostname', '127.0.0.1', '--port', String(port)],
      env: environment,
      vital: true,
      shown: development,
      patienceSeconds: 8,
    });
  }

  #startChild(name, child) {
    const logFile = this.#logFile(name);
    this.#supervisor.start({ name, logFile, cwd: this.#root, vital: false, ...child });
  }

  /** Lets the next start, and whoever asks, know what runs here. */
  #record() {
    if (this.#locked) updateLock(this.#lock, this.#facts());
  }

  #facts() {
    return {
      url: this.#configuration.publicUrl,
      catcherUrl: this.#catcher?.url ?? null,
      children: this.#supervisor.list(),
      ending: this.#ending,
    };
  }

  #databaseFolder() {
    return join(this.#configuration.dataFolder, 'database');
  }

  #logFile(name) {
    return join(this.#configuration.dataFolder, 'logs', `${name.replace(' ', '-')}.log`);
  }
}

/** Takes the lock, waiting for a holder that is on its way out. */
async function takeLockAfterEnd(path, facts) {
  const until = performance.now() + endPatienceSeconds * 1000;
  for (let said = false; ; said = true) {
    const lock = takeLock(path, facts);
    if (lock.taken || !lock.holder.ending || performance.now() > until || isEnding()) return lock;
    if (!said) say('the last Swaypoint is still ending; waiting for it');
    await new Promise((resolve) => setTimeout(resolve, 200));
  }
}
