/** Counts what passed and what failed, and remembers the failures by name. */
export class Tally {
  passed = 0;
  failed = 0;
  skipped = 0;
  #lines = [];

  /** One check, which holds or does not. */
  check(name, holds, detail = '') {
    this.add(name, { passed: holds ? 1 : 0, failed: holds ? 0 : 1, skipped: 0 }, detail);
  }

  /** The tests of one part. */
  add(name, { passed, failed, skipped }, detail = '') {
    this.passed += passed;
    this.failed += failed;
    this.skipped += skipped;
    const mark = failed === 0 ? 'passed' : 'FAILED';
    const counts = passed + failed === 1 ? '' : ` ${passed} passed, ${failed} failed`;
    const left = skipped === 0 ? '' : `, ${skipped} skipped`;
    this.#lines.push(`  ${mark}  ${name}${counts}${left}${detail === '' ? '' : ` (${detail})`}`);
  }

  /** The account, whose last line is `N passed, N failed`. */
  text() {
    return ['', ...this.#lines, '', `${this.passed} passed, ${this.failed} failed`].join('\n');
  }
}

/**
 * The counts in a report of vitest.
 *
 * A run that failed without a failed test (a file that does not load, an error outside of tests)
 * counts as one failure.
 *
 * @param {{ numPassedTests: number, numFailedTests: number, numPendingTests: number, numTodoTests: number } | null} report
 * @param {number} status exit status of the run
 */
export function vitestCounts(report, status) {
  const passed = report?.numPassedTests ?? 0;
  const failed = report?.numFailedTests ?? 0;
  const skipped = (report?.numPendingTests ?? 0) + (report?.numTodoTests ?? 0);
  return withStatus({ passed, failed, skipped }, status);
}

/**
 * The counts in a report of Playwright.
 *
 * @param {{ stats: { expected: number, unexpected: number, flaky: number, skipped: number } } | null} report
 * @param {number} status exit status of the run
 */
export function playwrightCounts(report, status) {
  const { expected = 0, unexpected = 0, flaky = 0, skipped = 0 } = report?.stats ?? {};
  return withStatus({ passed: expected, failed: unexpected + flaky, skipped }, status);
}

function withStatus(counts, status) {
  const unexplained = status !== 0 && counts.failed === 0;
  const nothingRan = counts.passed + counts.failed === 0;
  return unexplained || nothingRan ? { ...counts, failed: 1 } : counts;
}
