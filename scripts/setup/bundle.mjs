import { readdirSync } from 'node:fs';
import { basename, join } from 'node:path';
import { Problem } from './problem.mjs';

/**
 * Packages that must go into the bundle: plain Node does not find their named exports (rrule) or
 * their files (odex is loaded through a shim beside our own sources).
 */
const bundledPackages = /^(rrule|odex|tslib)$/;

/**
 * Turns every scripts/*.ts into dist/<name>.mjs for plain Node; packages stay outside, in node_modules.
 *
 * @param {string} root the repository
 */
export async function bundleScripts(root) {
  const { build, stop } = await import('esbuild');
  const folder = join(root, 'scripts');
  const entryPoints = readdirSync(folder)
    .filter((name) => name.endsWith('.ts') && !name.endsWith('.d.ts'))
    .map((name) => ({ in: join(folder, name), out: basename(name, '.ts') }));
  try {
    await build({
      absWorkingDir: root,
      entryPoints,
      outdir: join(root, 'dist'),
      outExtension: { '.js': '.mjs' },
      bundle: true,
      platform: 'node',
      format: 'esm',
      target: 'node20',
      mainFields: ['module', 'main'],
      logLevel: 'error',
      plugins: [packagesOutside],
    });
  } catch (error) {
    throw new Problem(`The scripts could not be bundled.\n${error.message}`);
  } finally {
    await stop();
  }
}

const packagesOutside = {
  name: 'packages-outside',
  setup(build) {
    build.onResolve({ filter: /^server-only$/ }, () => ({
      path: 'server-only',
      namespace: 'nothing',
    }));
    build.onLoad({ filter: /.*/, namespace: 'nothing' }, () => ({ contents: 'export {};' }));
    build.onResolve({ filter: /^[^./]/ }, ({ path, importer, kind }) => {
      if (kind === 'entry-point' || path.startsWith('@/')) return undefined;
      if (bundledPackages.test(path) || isInsideBundled(importer)) return undefined;
      return { path, external: true };
    });
  },
};

const isInsideBundled = (importer) => /\/node_modules\/(rrule|odex|tslib)\//.test(importer);
