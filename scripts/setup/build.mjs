import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { bundleScripts } from './bundle.mjs';
import { inTurn } from './lock-file.mjs';
import { Problem } from './problem.mjs';
import { run } from './processes.mjs';
import { say, step } from './progress.mjs';

const sourceFolders = ['app', 'components', 'db', 'fonts', 'lib', 'public', 'scripts'];
/** At the root: TypeScript that is served (proxy, instrumentation, settings) and what decides the build. */
const sourceFiles = /^(.+\.ts|package(-lock)?\.json|tsconfig\.json|postcss\.config\.mjs)$/;
const leftAside = /^(next-env\.d|vitest\.config|playwright\.config|drizzle\.config)\.ts$/;

/**
 * Builds the web server and the scripts unless what stands there was built from these very sources.
 *
 * @param {string} root the repository
 * @param {{ development: boolean }} options in development the web server compiles as it goes
 * @returns {Promise<string>} the key of the sources
 */
export async function ensureBuilt(root, { development }) {
  mkdirSync(join(root, 'dist'), { recursive: true });
  const waiting = () => say('another start is building; waiting for it');
  return inTurn(join(root, 'dist', 'build.lock'), waiting, async () => {
    const key = sourceKey(root);
    await once(join(root, 'dist', 'source-key'), key, () =>
      step('Bundling the worker and the scripts', () => bundleScripts(root)),
    );
    if (development) return key;
    await once(join(root, '.next', 'source-key'), key, () =>
      step('Building the pages: a minute or two, once a version', () => buildPages(root)),
    );
    return key;
  });
}

/** Runs the work unless the mark it left says that it was done for this key. */
async function once(mark, key, work) {
  if (existsSync(mark) && readFileSync(mark, 'utf8') === key) return;
  rmSync(mark, { force: true });
  await work();
  writeFileSync(mark, key);
}

async function buildPages(root) {
  const next = join(root, 'node_modules', 'next', 'dist', 'bin', 'next');
  const status = await run(process.execPath, [next, 'build'], {
    cwd: root,
    env: { ...process.env, NODE_ENV: 'production', NEXT_TELEMETRY_DISABLED: '1' },
  });
  if (status !== 0) throw new Problem('next build failed; its reason stands above.');
}

/**
 * A key that changes with any source file, with the packages and with Node.
 *
 * @param {string} root the repository
 * @returns {string} 64 hexadecimal digits
 */
export function sourceKey(root) {
  const hash = createHash('sha256').update(process.versions.node);
  const atRoot = readdirSync(root).filter(
    (name) => sourceFiles.test(name) && !leftAside.test(name),
  );
  const below = sourceFolders
    .filter((name) => existsSync(join(root, name)))
    .flatMap((name) => filesBelow(root, name));
  for (const path of [...atRoot, ...below].sort()) {
    const content = createHash('sha256')
      .update(readFileSync(join(root, path)))
      .digest();
    hash.update(`${path}\0`).update(content);
  }
  return hash.digest('hex');
}

function filesBelow(root, folder) {
  return readdirSync(join(root, folder), { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => join(entry.parentPath ?? entry.path, entry.name).slice(root.length + 1));
}
