/**
 * @typedef {object} Report what the test runner writes
 * @property {{ status: string, assertionResults: { status: string }[] }[]} testResults one a file
 */

/**
 * Counts a run. A file that could not be loaded counts as a failure, and so does a run that ended badly
 * although no test failed (an error outside any test, or no test found).
 *
 * @param {Report | undefined} report undefined: none was written
 * @param {number} code the runner's exit code
 * @returns {{ passed: number, failed: number }}
 */
export function countResults(report, code) {
  const files = report?.testResults ?? []
  const each = files.flatMap(file => file.assertionResults)
  const passed = each.filter(test => test.status === 'passed').length
  const broken = files.filter(file => file.status === 'failed' && !file.assertionResults.some(test => test.status === 'failed')).length
  const failed = each.filter(test => test.status === 'failed').length + broken
  return { passed, failed: failed === 0 && (code !== 0 || passed === 0) ? 1 : failed }
}
