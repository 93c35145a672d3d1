import { dirname } from 'node:path';
import { fileURLToPath } from 'node:url';
import { readConfiguration } from './setup/configuration.mjs';
import { checkNodeVersion } from './setup/dependencies.mjs';
import { Installation } from './setup/installation.mjs';
import { reportFailure } from './setup/problem.mjs';

/**
 * `npm start`: from a fresh clone to a running Swaypoint. Nothing but Node's own modules may be
 * imported here before the packages are installed. `--dev` serves the pages from their sources.
 */
const root = dirname(dirname(fileURLToPath(import.meta.url)));
let installation;
let signalled = false;

// Whoever read our output may be gone before we are.
for (const stream of [process.stdout, process.stderr]) stream.on('error', () => {});

async function end(status) {
  try {
    await installation?.stop();
  } catch (error) {
    reportFailure(error);
    process.exit(1);
  }
  process.exit(status);
}

function askedToEnd() {
  // A terminal and npm both send a signal: the second says nothing new.
  if (signalled) return;
  signalled = true;
  console.log('\n· Ending …');
  end(0);
}

for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) process.on(signal, askedToEnd);

/** npm starts us through a shell that passes no signal on: its death is the signal. */
function endWithNpm() {
  const parent = process.ppid;
  setInterval(() => {
    if (process.ppid !== parent) askedToEnd();
  }, 250).unref();
}
if (process.env.npm_lifecycle_event !== undefined) endWithNpm();

try {
  checkNodeVersion();
  const configuration = readConfiguration(process.env, process.argv.slice(2), root);
  installation = new Installation(root, configuration, (problem) => {
    reportFailure(problem);
    end(1);
  });
  await installation.start();
} catch (error) {
  if (!signalled) {
    reportFailure(error);
    await end(1);
  }
}
