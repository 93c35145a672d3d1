import { randomBytes } from 'node:crypto';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import type { TestProject } from 'vitest/node';
import { startMariadb, stopMariadb } from '../../scripts/setup/mariadb.mjs';
import { migrateDatabase } from '../../scripts/setup/migrate';
import { testDatabaseName, testWorkers } from './test-databases';

/**
 * Starts one MariaDB for this run, in a folder and on a port of its own, with one migrated database
 * for each test file that runs at the same time. Nothing of it stays.
 */
export default async function setUp(project: TestProject) {
  const folder = await mkdtemp(join(tmpdir(), 'swaypoint-test-'));
  const password = randomBytes(18).toString('base64url');
  const user = 'swaypoint_test';
  const workers = Array.from({ length: testWorkers }, (_, index) => index + 1);
  const databases = workers.map(testDatabaseName);
  // For the tests of the migration itself.
  const spare = databases.map((name) => `${name}_migrate`);
  const server = await startMariadb(join(folder, 'mariadb'), {
    user,
    password,
    databases: [...databases, ...spare],
    durable: false,
  });
  const tearDown = async () => {
    await stopMariadb(server);
    await rm(folder, { recursive: true, force: true });
  };
  try {
    const access = { host: server.host, port: server.port, user, password };
    for (const database of databases) {
      await migrateDatabase({ ...access, database }, resolve('db/migrations'));
    }
    project.provide('testServer', access);
    project.provide('testDataFolder', folder);
  } catch (error) {
    await tearDown();
    throw error;
  }
  return tearDown;
}
