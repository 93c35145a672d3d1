import { randomBytes } from 'node:crypto';
import {
  chmodSync,
  existsSync,
  mkdirSync,
  readFileSync,
  renameSync,
  statSync,
  writeFileSync,
} from 'node:fs';
import { join } from 'node:path';
import { Problem } from './problem.mjs';

/** Makes the data folder, readable by its owner alone. */
export function prepareDataFolder(folder) {
  try {
    for (const path of [
      folder,
      join(folder, 'logs'),
      join(folder, 'mail'),
      join(folder, 'uploads'),
    ]) {
      mkdirSync(path, { recursive: true, mode: 0o700 });
    }
    chmodSync(folder, 0o700);
  } catch (error) {
    throw new Problem(
      `The data folder ${folder} cannot be used (${error.code ?? error.message}).\n` +
        'Choose another with DATA_DIR, for example: DATA_DIR=~/swaypoint-data npm start',
    );
  }
}

/**
 * The secrets of this installation: made once, kept in a file that its owner alone may read.
 *
 * @returns {{ databasePassword: string, sessionSecret: string }}
 */
export function readSecrets(folder) {
  const path = join(folder, 'secrets.json');
  if (!existsSync(path)) {
    const secrets = {
      databasePassword: randomBytes(24).toString('base64url'),
      sessionSecret: randomBytes(48).toString('base64url'),
    };
    writeFileSync(`${path}.new`, `${JSON.stringify(secrets, null, 2)}\n`, { mode: 0o600 });
    renameSync(`${path}.new`, path);
    return secrets;
  }
  if ((statSync(path).mode & 0o077) !== 0) chmodSync(path, 0o600);
  const secrets = readJson(path);
  for (const name of ['databasePassword', 'sessionSecret']) {
    if (typeof secrets?.[name] !== 'string') {
      throw new Problem(`${path} is damaged: ${name} is missing. Restore it from a backup.`);
    }
  }
  return secrets;
}

/** Ports chosen at an earlier start, to be used again when they are free. */
export function readPorts(folder) {
  return readJson(join(folder, 'ports.json')) ?? {};
}

export function savePorts(folder, ports) {
  writeFileSync(join(folder, 'ports.json'), `${JSON.stringify(ports)}\n`, { mode: 0o600 });
}

function readJson(path) {
  try {
    return JSON.parse(readFileSync(path, 'utf8'));
  } catch {
    return null;
  }
}
