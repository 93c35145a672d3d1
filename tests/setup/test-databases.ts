/** How many test files run at once; each has a database of its own. */
export const testWorkers = 2;

export type TestServer = { host: string; port: number; user: string; password: string };

export function testDatabaseName(worker: number): string {
  return `swaypoint_test_${worker}`;
}

declare module 'vitest' {
  export interface ProvidedContext {
    testServer: TestServer;
    testDataFolder: string;
  }
}
