/**
 * Counts a Vitest JSON report. A file that could not be run has no tests to fail, so it counts as one failure.
 *
 * @param {any} report the parsed report, or undefined if there is none
 * @param {number} status the exit status of the runner
 * @returns {{ passed: number, failed: number }}
 */
export function countVitest(report, status) {
  if (report === undefined) return { passed: 0, failed: 1 };
  const unrunFiles = report.testResults.filter(
    (file) => file.status === 'failed' && !file.assertionResults.some((test) => test.status === 'failed'),
  ).length;
  return withStatus({ passed: report.numPassedTests, failed: report.numFailedTests + unrunFiles }, status);
}

/**
 * Counts a Playwright JSON report. A test that passed only at a second try has failed; errors outside any
 * test, such as a file that cannot be read, count one each.
 *
 * @param {any} report the parsed report, or undefined if there is none
 * @param {number} status the exit status of the runner
 * @returns {{ passed: number, failed: number }}
 */
export function countPlaywright(report, status) {
  if (report === undefined) return { passed: 0, failed: 1 };
  const { expected, unexpected, flaky } = report.stats;
  return withStatus({ passed: expected, failed: unexpected + flaky + report.errors.length }, status);
}

/** A runner that fails, or finds nothing, has failed even if no test says so. */
function withStatus({ passed, failed }, status) {
  const isSilentFailure = failed === 0 && (status !== 0 || passed === 0);
  return { passed, failed: isSilentFailure ? 1 : failed };
}
