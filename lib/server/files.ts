import { chmod, mkdir, readFile, rename, rm, writeFile } from 'node:fs/promises';
import { join, resolve } from 'node:path';
import { v7 as uuid } from 'uuid';
import { env } from './env';

const SHA256 = /^[0-9a-f]{64}$/;
const UUID = /^[0-9a-f-]{36}$/;

/** Where a file with this content lies; both parts are checked, so that no path can be led astray. */
function placeOf({ labId, sha256 }: { labId: string; sha256: string }) {
  if (!UUID.test(labId) || !SHA256.test(sha256)) throw new RangeError('not a place for a file');
  const folder = join(resolve(env().DATA_DIR), 'uploads', labId);
  return { folder, file: join(folder, sha256) };
}

/** A file written but not yet in its place; `keep` puts it there, `drop` takes it away. */
export type HeldFile = { keep: () => Promise<void>; drop: () => Promise<void> };

/**
 * Writes bytes, readable by this account alone, beside the place that their SHA-256 names. The same
 * content kept twice is one file; nothing that is kept is ever written over with anything else.
 */
export async function holdFile(
  of: { labId: string; sha256: string },
  bytes: Uint8Array,
): Promise<HeldFile> {
  const { folder, file } = placeOf(of);
  await mkdir(folder, { recursive: true, mode: 0o700 });
  const part = join(folder, `.${uuid()}.part`);
  try {
    await writeFile(part, bytes, { mode: 0o600, flag: 'wx', flush: true });
    await chmod(part, 0o600);
  } catch (error) {
    await rm(part, { force: true });
    throw error;
  }
  return {
    keep: () => rename(part, file),
    drop: () => rm(part, { force: true }),
  };
}

/** The bytes of a kept file, unchanged. */
export async function readKeptFile(of: { labId: string; sha256: string }): Promise<Buffer> {
  return readFile(placeOf(of).file);
}
