import { Problem } from './problem.mjs';
import { findProgram, run } from './processes.mjs';
import { say, step } from './progress.mjs';

/**
 * Makes sure that programs are there, installing Debian's packages for those that are not.
 *
 * @param {string} what as people would say it
 * @param {string[]} programs needed on the machine
 * @param {string[]} packages Debian's packages that carry them
 */
export async function ensurePrograms(what, programs, packages) {
  if (programs.every((name) => findProgram(name) !== null)) return;
  await step(`${what} is missing: installing ${packages.join(' and ')}`, () => install(packages));
  const absent = programs.filter((name) => findProgram(name) === null);
  if (absent.length > 0) {
    throw new Problem(
      `After installing ${packages.join(', ')} still missing: ${absent.join(', ')}.`,
    );
  }
}

export const ensureMariadb = () =>
  ensurePrograms(
    'MariaDB',
    ['mariadbd', 'mariadb-install-db'],
    ['mariadb-server-core', 'mariadb-client-core'],
  );

export const ensureChromium = () => ensurePrograms('Chromium', ['chromium'], ['chromium']);

async function install(packages) {
  const byHand = `apt-get update && apt-get install --no-install-recommends ${packages.join(' ')}`;
  if (findProgram('apt-get') === null) {
    throw new Problem(
      `This machine has no apt-get. Please install ${packages.join(' and ')} (on Debian:\n\n  ${byHand}\n\n) and start again.`,
    );
  }
  const prefix = await administrator();
  if (prefix === null) {
    throw new Problem(
      `Installing needs an administrator. Please run this once, then start again:\n\n  sudo sh -c '${byHand}'\n`,
    );
  }
  const wanted = ['install', '--yes', '--no-install-recommends', ...packages];
  if ((await aptGet(prefix, wanted)) === 0) return;
  say('the lists of packages are old or absent: fetching them');
  await aptGet(prefix, ['update']);
  if ((await aptGet(prefix, wanted)) !== 0) {
    throw new Problem(
      `apt-get could not install ${packages.join(' and ')}; its reason stands above.`,
    );
  }
}

/** Words before a command that give it an administrator's rights without asking; null when there are none. */
async function administrator() {
  if (process.getuid?.() === 0) return [];
  const sudo = findProgram('sudo');
  if (sudo === null) return null;
  const status = await run(sudo, ['-n', 'true'], { logFile: '/dev/null' });
  return status === 0 ? [sudo, '-n'] : null;
}

function aptGet(prefix, args) {
  const options = ['-qq', '-o', 'Dpkg::Use-Pty=0', '-o', 'DPkg::Lock::Timeout=120'];
  const words = [
    ...prefix,
    'env',
    'DEBIAN_FRONTEND=noninteractive',
    'apt-get',
    ...options,
    ...args,
  ];
  return run(words[0], words.slice(1), { finishes: true });
}
