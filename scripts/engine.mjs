import { createHash, randomUUID } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, renameSync, rmSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';

/**
 * `npm run -s engine -- <verb> < request.json > answer.json`. Bundles `engine.ts` once a state of the
 * sources (kept under node_modules/.cache, named by their content) and runs it. Needs `npm ci` alone.
 */
const root = dirname(dirname(fileURLToPath(import.meta.url)));
const cache = join(root, 'node_modules', '.cache', 'swaypoint');

function* sources(folder) {
  for (const entry of readdirSync(folder, { withFileTypes: true })) {
    const path = join(folder, entry.name);
    if (entry.isDirectory()) yield* sources(path);
    else if (/\.(ts|mjs|js|json)$/.test(entry.name)) yield path;
  }
}

function contentKey() {
  const hash = createHash('sha256');
  const folders = ['contracts', 'sim', 'planner', 'evidence'].map((f) => join(root, 'lib', f));
  const files = folders.filter((f) => existsSync(f)).flatMap((f) => [...sources(f)]);
  const own = ['scripts/engine.ts', 'scripts/engine.mjs', 'package-lock.json', 'tsconfig.json'];
  for (const file of [...files.sort(), ...own.map((f) => join(root, f))]) {
    hash.update(file.slice(root.length)).update('\0').update(readFileSync(file)).update('\0');
  }
  return hash.digest('hex').slice(0, 32);
}

async function bundle(target) {
  const { build } = await import('esbuild');
  const fresh = `${target}-${randomUUID()}`;
  await build({
    entryPoints: [join(root, 'scripts', 'engine.ts')],
    outdir: fresh,
    outExtension: { '.js': '.mjs' },
    bundle: true,
    splitting: true,
    format: 'esm',
    platform: 'node',
    target: 'node20',
    minifySyntax: true,
    logLevel: 'silent',
    tsconfig: join(root, 'tsconfig.json'),
    banner: {
      js: "import { createRequire as engineRequire } from 'node:module'; const require = engineRequire(import.meta.url);",
    },
  });
  dropOlder();
  try {
    renameSync(fresh, target);
  } catch {
    // Another process was quicker with the same content.
    rmSync(fresh, { recursive: true, force: true });
  }
}

/** Bundles of earlier sources; the three newest names may still be in use by a running command. */
function dropOlder() {
  const kept = readdirSync(cache, { withFileTypes: true }).filter(
    (e) => e.isDirectory() && /^engine-[0-9a-f]{32}$/.test(e.name),
  );
  for (const entry of kept.slice(3))
    rmSync(join(cache, entry.name), { recursive: true, force: true });
}

try {
  mkdirSync(cache, { recursive: true });
  const target = join(cache, `engine-${contentKey()}`);
  if (!existsSync(join(target, 'engine.mjs'))) await bundle(target);
  const { run } = await import(pathToFileURL(join(target, 'engine.mjs')).href);
  await run(process.argv.slice(2));
} catch (error) {
  const missing = error?.code === 'ERR_MODULE_NOT_FOUND';
  const message = missing
    ? 'the packages are not installed: run `npm ci` first'
    : `the engine could not be started: ${String(error?.message ?? error).split('\n')[0]}`;
  process.stdout.write(`${JSON.stringify({ error: { code: 'internal', message, at: '' } })}\n`);
  process.exitCode = 2;
}
