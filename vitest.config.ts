import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vitest/config';
import { testWorkers } from './tests/setup/test-databases';

const pureFolders =
  'sim,planner,evidence,rehearsal,components,architecture,contracts,reference,scripts';

const shared = {
  testTimeout: 60_000,
  exclude: ['tests/e2e/**', 'node_modules/**'],
};

const resolve = {
  tsconfigPaths: true,
  alias: { 'server-only': fileURLToPath(new URL('./tests/setup/nothing.ts', import.meta.url)) },
};

export default defineConfig({
  test: {
    maxWorkers: testWorkers,
    projects: [
      {
        resolve,
        test: {
          ...shared,
          name: 'pure',
          include: [`tests/{${pureFolders}}/**/*.test.{ts,tsx}`],
        },
      },
      {
        resolve,
        test: {
          ...shared,
          name: 'db',
          include: ['tests/{db,api}/**/*.test.{ts,tsx}'],
          globalSetup: ['tests/setup/private-mariadb.ts'],
          setupFiles: ['tests/setup/database-settings.ts'],
          hookTimeout: 60_000,
        },
      },
    ],
  },
});
