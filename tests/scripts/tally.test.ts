import { describe, expect, test } from 'vitest';
import { playwrightCounts, Tally, vitestCounts } from '../../scripts/setup/tally.mjs';

const lastLine = (text: string) => text.trimEnd().split('\n').at(-1);

describe('what npm test says at its end', () => {
  test('the last line adds single checks and counted tests', () => {
    const tally = new Tally();
    tally.check('style', true);
    tally.check('types', false);
    tally.add('tests', { passed: 40, failed: 2, skipped: 1 });
    expect(lastLine(tally.text())).toBe('41 passed, 3 failed');
  });

  test('a run that broke off without a failed test counts as a failure', () => {
    const report = { numPassedTests: 7, numFailedTests: 0, numPendingTests: 0, numTodoTests: 0 };
    expect(vitestCounts(report, 1)).toEqual({ passed: 7, failed: 1, skipped: 0 });
    expect(vitestCounts(report, 0)).toEqual({ passed: 7, failed: 0, skipped: 0 });
  });

  test('a run of which nothing is known, or in which nothing ran, counts as a failure', () => {
    expect(vitestCounts(null, 0).failed).toBe(1);
    expect(playwrightCounts(null, 0).failed).toBe(1);
    const empty = { stats: { expected: 0, unexpected: 0, flaky: 0, skipped: 3 } };
    expect(playwrightCounts(empty, 0)).toEqual({ passed: 0, failed: 1, skipped: 3 });
  });

  test('a browser test that passes only at times counts as failed', () => {
    const report = { stats: { expected: 4, unexpected: 1, flaky: 2, skipped: 0 } };
    expect(playwrightCounts(report, 1)).toEqual({ passed: 4, failed: 3, skipped: 0 });
  });
});
