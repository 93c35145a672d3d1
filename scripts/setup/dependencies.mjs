import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { Problem } from './problem.mjs';
import { run } from './processes.mjs';
import { step } from './progress.mjs';

/** The oldest Node that works, as `engines` in package.json says. */
const oldestNode = [20, 9];

/** @throws Problem when this Node is too old */
export function checkNodeVersion(version = process.versions.node) {
  const [major = 0, minor = 0] = version.split('.').map(Number);
  const enough = major > oldestNode[0] || (major === oldestNode[0] && minor >= oldestNode[1]);
  if (!enough) {
    throw new Problem(
      `Swaypoint needs Node ${oldestNode.join('.')} or newer, and this is Node ${version}.\n` +
        'Please install a newer one (https://nodejs.org), then start again.',
    );
  }
}

/**
 * Runs `npm ci` unless what is installed is what package-lock.json asks for.
 *
 * @param {string} root the repository
 */
export async function ensureDependencies(root) {
  if (dependenciesMatch(root)) return;
  await step('Installing packages (npm ci): a minute or two, the first time', async () => {
    const args = ['ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel=error'];
    const status = await run('npm', args, { cwd: root, env: cleanNpmEnvironment() });
    if (status !== 0) {
      throw new Problem(
        'npm ci failed; its reason stands above. Without network the packages cannot come.',
      );
    }
  });
}

/**
 * Whether node_modules holds exactly the versions of package-lock.json. npm writes down what it
 * installed once it is done, so an interrupted install does not pass.
 */
export function dependenciesMatch(root) {
  const wanted = readLock(join(root, 'package-lock.json'));
  const installed = readLock(join(root, 'node_modules', '.package-lock.json'));
  if (wanted === null) throw new Problem('package-lock.json is missing or damaged.');
  if (installed === null) return false;
  const rightVersions = Object.entries(installed).every(
    ([path, { version, integrity }]) =>
      wanted[path]?.version === version && wanted[path]?.integrity === integrity,
  );
  const complete = Object.entries(wanted).every(
    // Packages for other kinds of machine are optional, and absent here.
    ([path, entry]) => path === '' || entry.optional || entry.devOptional || path in installed,
  );
  return rightVersions && complete;
}

function readLock(path) {
  if (!existsSync(path)) return null;
  try {
    return JSON.parse(readFileSync(path, 'utf8')).packages ?? null;
  } catch {
    return null;
  }
}

/** Settings of the npm that started us (a script's name, a prefix) must not reach another npm. */
function cleanNpmEnvironment() {
  const kept = Object.entries(process.env).filter(
    ([name]) => !/^npm_(lifecycle|package|command|config_local_prefix)/.test(name),
  );
  return { ...Object.fromEntries(kept), NODE_ENV: undefined };
}
