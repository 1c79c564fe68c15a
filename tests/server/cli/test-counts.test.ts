import { describe, expect, it } from 'vitest';
import { readPlaywrightCounts, readVitestCounts } from '../../../server/cli/test-counts.ts';

const file = (status: string, ...tests: string[]) => ({
  status,
  assertionResults: tests.map((each) => ({ status: each })),
});

describe('the count over all suites', () => {
  it('adds up the tests of every file', () => {
    const report = { testResults: [file('passed', 'passed', 'passed'), file('failed', 'passed', 'failed')] };
    expect(readVitestCounts(JSON.stringify(report))).toEqual({ passed: 3, failed: 1 });
  });

  it('counts a file that could not be loaded as a failure', () => {
    const report = { testResults: [file('failed'), file('passed', 'passed')] };
    expect(readVitestCounts(JSON.stringify(report))).toEqual({ passed: 1, failed: 1 });
  });

  it.each(['pending', 'skipped', 'todo'])('counts a test that is %s as a failure', (status) => {
    expect(readVitestCounts(JSON.stringify({ testResults: [file('passed', 'passed', status)] }))).toEqual({
      passed: 1,
      failed: 1,
    });
  });

  it('counts repeated, unrun and outer errors of the browser run as failures', () => {
    const report = { stats: { expected: 5, unexpected: 1, flaky: 1, skipped: 2 }, errors: [{}] };
    expect(readPlaywrightCounts(JSON.stringify(report))).toEqual({ passed: 5, failed: 5 });
  });

  it('refuses a report that it does not understand', () => {
    expect(() => readVitestCounts('{"results":[]}')).toThrow();
  });
});
