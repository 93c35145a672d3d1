import { join } from 'node:path';
import { inject } from 'vitest';
import { testDatabaseName, testWorkers } from './test-databases';

/** Gives the test file's process the settings that `npm start` gives to the server's. */
const server = inject('testServer');
const worker = Number(process.env.VITEST_POOL_ID ?? '1');
if (!(worker >= 1 && worker <= testWorkers)) {
  throw new Error(`There are ${testWorkers} test databases and none for worker ${worker}.`);
}

Object.assign(process.env, {
  DATA_DIR: join(inject('testDataFolder'), `files-${worker}`),
  DATABASE_HOST: server.host,
  DATABASE_PORT: String(server.port),
  DATABASE_USER: server.user,
  DATABASE_PASSWORD: server.password,
  DATABASE_NAME: testDatabaseName(worker),
  NEXTAUTH_SECRET: 'only for tests, where nobody signs in from outside',
  PUBLIC_URL: 'http://127.0.0.1:3000',
  NEXTAUTH_URL: 'http://127.0.0.1:3000',
  // Discard: a test that sends mail starts an SMTP server of its own.
  SMTP_URL: 'smtp://127.0.0.1:9',
  MAIL_FROM: 'Swaypoint <swaypoint@localhost>',
});
