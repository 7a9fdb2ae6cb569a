import { describe, expect, it } from 'vitest';
import { countPlaywright, countVitest } from './test-report.mjs';

const vitestFile = (status: string, ...tests: string[]) => ({
  status,
  assertionResults: tests.map((test) => ({ status: test })),
});

describe('countVitest', () => {
  it('counts the tests that passed and failed', () => {
    const report = {
      numPassedTests: 2,
      numFailedTests: 1,
      testResults: [vitestFile('passed', 'passed', 'passed'), vitestFile('failed', 'failed')],
    };
    expect(countVitest(report, 1)).toEqual({ passed: 2, failed: 1 });
  });

  it('counts a file that could not be run as a failure', () => {
    const report = {
      numPassedTests: 1,
      numFailedTests: 0,
      testResults: [vitestFile('passed', 'passed'), vitestFile('failed')],
    };
    expect(countVitest(report, 1)).toEqual({ passed: 1, failed: 1 });
  });

  it('counts a failure that no test owns up to, such as an unhandled rejection', () => {
    const report = { numPassedTests: 1, numFailedTests: 0, testResults: [vitestFile('passed', 'passed')] };
    expect(countVitest(report, 1)).toEqual({ passed: 1, failed: 1 });
    expect(countVitest(report, 0)).toEqual({ passed: 1, failed: 0 });
  });

  it('fails when nothing ran, or nothing was reported', () => {
    expect(countVitest({ numPassedTests: 0, numFailedTests: 0, testResults: [] }, 0)).toEqual({
      passed: 0,
      failed: 1,
    });
    expect(countVitest(undefined, 0)).toEqual({ passed: 0, failed: 1 });
  });
});

describe('countPlaywright', () => {
  const stats = { expected: 3, unexpected: 1, flaky: 1, skipped: 2 };

  it('counts a flaky test as failed, and a skipped one not at all', () => {
    expect(countPlaywright({ stats, errors: [] }, 1)).toEqual({ passed: 3, failed: 2 });
  });

  it('counts errors outside any test', () => {
    const quiet = { expected: 1, unexpected: 0, flaky: 0, skipped: 0 };
    expect(countPlaywright({ stats: quiet, errors: [{ message: 'a file cannot be read' }] }, 1)).toEqual({
      passed: 1,
      failed: 1,
    });
  });

  it('fails when nothing ran, or nothing was reported', () => {
    const empty = { expected: 0, unexpected: 0, flaky: 0, skipped: 0 };
    expect(countPlaywright({ stats: empty, errors: [] }, 0)).toEqual({ passed: 0, failed: 1 });
    expect(countPlaywright(undefined, 0)).toEqual({ passed: 0, failed: 1 });
  });
});
