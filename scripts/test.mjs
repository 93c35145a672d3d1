import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { checkNodeVersion, ensureDependencies } from './setup/dependencies.mjs';
import { removeInstance, startInstance } from './setup/instance.mjs';
import { reportFailure } from './setup/problem.mjs';
import { endCommands, isEnding, run } from './setup/processes.mjs';
import { ensureChromium, ensureMariadb } from './setup/system-packages.mjs';
import { playwrightCounts, Tally, vitestCounts } from './setup/tally.mjs';

/**
 * `npm test`: sets up what it needs, then style, types, tests, and a whole Swaypoint in a browser.
 * `npm test -- checks`, `tests` or `browser` runs that part alone. The last line is
 * `N passed, N failed`.
 */
const root = dirname(dirname(fileURLToPath(import.meta.url)));
const tally = new Tally();
const folder = mkdtempSync(join(tmpdir(), 'swaypoint-check-'));
const dataFolder = join(folder, 'data');

const tool = (...path) => join(root, 'node_modules', ...path);
const node = (args, env = {}) =>
  run(process.execPath, args, {
    cwd: root,
    env: { ...process.env, NEXT_TELEMETRY_DISABLED: '1', ...env },
  });

async function checks() {
  heading('Style');
  tally.check(
    'style',
    (await node([tool('@biomejs', 'biome', 'bin', 'biome'), 'check', '.'])) === 0,
  );
  heading('Types');
  const routes = await node([tool('next', 'dist', 'bin', 'next'), 'typegen']);
  const types = await node([tool('typescript', 'bin', 'tsc'), '--noEmit']);
  tally.check('types', routes === 0 && types === 0);
}

async function tests() {
  heading('Tests');
  const report = join(folder, 'tests.json');
  const args = ['run', '--reporter=default', '--reporter=json', `--outputFile.json=${report}`];
  const status = await node([tool('vitest', 'vitest.mjs'), ...args], { NODE_ENV: 'test' });
  tally.add('tests', vitestCounts(readJson(report), status));
}

async function browser() {
  heading('A whole Swaypoint, in a browser');
  const first = await startInstance(root, dataFolder);
  process.stdout.write(first.output);
  tally.check('npm start on an empty data folder', true, seconds(first.readyMs));
  checkEnd('it ends cleanly', await first.stop());

  const second = await startInstance(root, dataFolder);
  // A second start skips installing, building and seeding; a ratio holds on any machine.
  const share = second.readyMs / first.readyMs;
  const times = `${seconds(second.readyMs)} after ${seconds(first.readyMs)}`;
  tally.check('a second start takes less than half of the first', share < 0.5, times);
  tally.check('the demo lab is still there', signIns(second) === signIns(first));

  const report = join(folder, 'browser.json');
  const status = await node(
    [tool('@playwright', 'test', 'cli.js'), 'test', '--reporter=list,json'],
    {
      SWAYPOINT_URL: second.url,
      SWAYPOINT_MAIL_URL: second.catcherUrl,
      SWAYPOINT_DATA_DIR: dataFolder,
      PLAYWRIGHT_JSON_OUTPUT_FILE: report,
    },
  );
  tally.add('browser tests', playwrightCounts(readJson(report), status));
  checkEnd('it ends cleanly after the browser tests', await second.stop());
}

function checkEnd(name, { status, left }) {
  tally.check(name, status === 0 && left === 0, `status ${status}, ${left} processes left`);
}

const signIns = ({ output }) =>
  /Sign in to the demo lab as\n([\s\S]*?)\n\n/.exec(output)?.[1] ?? 'none';
const seconds = (milliseconds) => `${(milliseconds / 1000).toFixed(1)} s`;
const heading = (text) => console.log(`\n── ${text}`);

function readJson(path) {
  try {
    return JSON.parse(readFileSync(path, 'utf8'));
  } catch {
    return null;
  }
}

/** A part that breaks off is one failure; the parts after it still run. */
async function part(name, work) {
  try {
    await work();
  } catch (error) {
    if (isEnding()) return;
    reportFailure(error);
    tally.check(`${name} ran to the end`, false);
  }
}

async function leave(status) {
  await removeInstance(dataFolder);
  rmSync(folder, { recursive: true, force: true });
  process.exit(status);
}

for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) {
  process.on(signal, () => {
    if (isEnding()) return;
    console.log('\n· Ending …');
    endCommands().then(() => leave(1));
  });
}

const parts = { checks, tests, browser };
const wanted = process.argv.slice(2).filter((word) => !word.startsWith('--'));
const unknown = wanted.find((word) => !(word in parts));
if (unknown !== undefined) {
  console.error(`There is no part "${unknown}"; the parts are ${Object.keys(parts).join(', ')}.`);
  await leave(1);
}
await part('setting up', async () => {
  checkNodeVersion();
  await ensureMariadb();
  await ensureChromium();
  await ensureDependencies(root);
});
if (tally.failed === 0) {
  for (const [name, work] of Object.entries(parts)) {
    if (wanted.length === 0 || wanted.includes(name)) await part(name, work);
  }
}
if (!isEnding()) {
  console.log(tally.text());
  await leave(tally.failed === 0 ? 0 : 1);
}
