import { linkSync, readFileSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { isSameProcess, processIdentity } from './processes.mjs';

/**
 * Takes a lock file, so that one process at a time does something. A file left by a process that no
 * longer lives is put aside.
 *
 * @param {string} path of the lock file; its folder exists
 * @param {object} [extra] to be read by others meanwhile
 * @returns {{ taken: true, previous: object | null } | { taken: false, holder: object }} `previous`
 *   is what a predecessor that did not end properly had written
 */
export function takeLock(path, extra = {}) {
  const draft = `${path}.${process.pid}`;
  writeLock(draft, extra);
  let previous = null;
  try {
    for (let tries = 0; tries < 20; tries += 1) {
      try {
        // Unlike writing, linking fails when the name exists, and what it shows is complete.
        linkSync(draft, path);
        return { taken: true, previous };
      } catch (error) {
        if (error.code !== 'EEXIST') throw error;
      }
      const holder = readLock(path);
      if (holder !== null && isSameProcess(holder.pid, holder.identity)) {
        return { taken: false, holder };
      }
      previous = holder ?? previous;
      putAside(path);
    }
    throw new Error(`${path} cannot be taken.`);
  } finally {
    rmSync(draft, { force: true });
  }
}

/** Writes anew what the holder of the lock lets others read. */
export function updateLock(path, extra) {
  const draft = `${path}.${process.pid}`;
  writeLock(draft, extra);
  renameSync(draft, path);
}

export function giveLockBack(path) {
  rmSync(path, { force: true });
}

/** What stands in a lock file; null when it is absent or unreadable. */
export function readLock(path) {
  try {
    return JSON.parse(readFileSync(path, 'utf8'));
  } catch {
    return null;
  }
}

function writeLock(path, extra) {
  const text = { pid: process.pid, identity: processIdentity(process.pid), ...extra };
  writeFileSync(path, `${JSON.stringify(text, null, 2)}\n`, { mode: 0o600 });
}

function putAside(path) {
  const aside = `${path}.stale.${process.pid}`;
  try {
    renameSync(path, aside);
    const moved = readLock(aside);
    // Somebody else may have put the stale file aside first and taken the lock: it is theirs.
    if (moved !== null && isSameProcess(moved.pid, moved.identity)) linkSync(aside, path);
  } catch (error) {
    if (error.code !== 'ENOENT' && error.code !== 'EEXIST') throw error;
  } finally {
    rmSync(aside, { force: true });
  }
}

/**
 * Does something while holding a lock, waiting for whoever holds it.
 *
 * @param {string} path
 * @param {() => void} onWait called once, when somebody else is at it
 * @param {() => Promise<T>} work
 * @template T
 */
export async function inTurn(path, onWait, work) {
  for (let waited = false; !takeLock(path).taken; waited = true) {
    if (!waited) onWait();
    await new Promise((resolve) => setTimeout(resolve, 500));
  }
  try {
    return await work();
  } finally {
    giveLockBack(path);
  }
}
