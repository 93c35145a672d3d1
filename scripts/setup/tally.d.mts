export type Counts = { passed: number; failed: number; skipped: number };

export class Tally {
  passed: number;
  failed: number;
  skipped: number;
  check(name: string, holds: boolean, detail?: string): void;
  add(name: string, counts: Counts, detail?: string): void;
  text(): string;
}

export function vitestCounts(
  report: {
    numPassedTests: number;
    numFailedTests: number;
    numPendingTests: number;
    numTodoTests: number;
  } | null,
  status: number,
): Counts;

export function playwrightCounts(
  report: {
    stats: { expected: number; unexpected: number; flaky: number; skipped: number };
  } | null,
  status: number,
): Counts;
