/**
 * @typedef {{ status: string, name: string, assertionResults: { status: string }[] }} FileResult
 */

/**
 * Counts of a test run. A file that could not even be loaded has no tests, yet it failed; and a run that ended
 * badly with all tests green (a leaked error, a crash) is not green.
 *
 * @param {{ testResults: FileResult[] } | null} report what vitest's JSON reporter wrote; null when nothing
 * @param {number} exitCode of vitest
 * @returns {{ passed: number, failed: number, skipped: number, unloaded: string[] }}
 */
export function countResults(report, exitCode) {
  const files = report?.testResults ?? [];
  const statuses = files.flatMap(({ assertionResults }) => assertionResults.map(({ status }) => status));
  const of = (/** @type {string} */ wanted) => statuses.filter((status) => status === wanted).length;
  const unloaded = files
    .filter(({ status, assertionResults }) => {
      const hasFailedTest = assertionResults.some((test) => test.status === 'failed');
      return status === 'failed' && !hasFailedTest;
    })
    .map(({ name }) => name);
  const passed = of('passed');
  const failed = of('failed') + unloaded.length;
  const skipped = statuses.length - passed - of('failed');
  return { passed, failed: failed || (exitCode === 0 ? 0 : 1), skipped, unloaded };
}
