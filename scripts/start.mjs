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

async function end(status) {
  try {
    await installation?.stop();
  } catch (error) {
    reportFailure(error);
    process.exit(1);
  }
  process.exit(status);
}

for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) {
  process.on(signal, () => {
    // A terminal and npm both send it: the second says nothing new.
    if (signalled) return;
    signalled = true;
    console.log('\n· Ending …');
    end(0);
  });
}

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
