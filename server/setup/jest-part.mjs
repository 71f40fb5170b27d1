import { mkdir, readFile, rm } from 'node:fs/promises';
import path from 'node:path';

import { dataFolder, root } from './paths.mjs';
import { lastLines, run } from './run.mjs';

const JEST = path.join(root, 'node_modules', 'jest', 'bin', 'jest.js');

/**
 * Runs one jest project and counts.
 *
 * @param pattern only spec files whose path matches; then it is no fault that there are none
 */
export async function runJest(project, { workers, env, pattern }) {
  const reports = path.join(dataFolder, 'test-reports');
  await mkdir(reports, { recursive: true });
  const reportFile = path.join(reports, `${project}.json`);
  await rm(reportFile, { force: true });

  const { code, output } = await run(
    process.execPath,
    [
      JEST,
      ...['-c', 'test/jest.config.cjs', '--selectProjects', project, '--ci'],
      ...[`--maxWorkers=${workers}`, '--json', `--outputFile=${reportFile}`],
      ...(pattern ? ['--passWithNoTests', '--testPathPatterns', pattern] : []),
    ],
    { env: { ...env, NO_COLOR: '1' } },
  );
  // No report: jest itself fell over.
  const report = await readFile(reportFile, 'utf8').then(JSON.parse, () => null);
  if (!report) return { passed: 0, failed: 1, skipped: 0, details: [lastLines(output, 40)] };

  const { details, brokenSuites } = read(report);
  let failed = report.numFailedTests + brokenSuites;
  if (failed === 0 && code !== 0) {
    failed = 1;
    details.push(
      report.numTotalTests === 0 ? `no ${project} tests were found` : lastLines(output, 40),
    );
  }
  return {
    passed: report.numPassedTests,
    failed,
    skipped: report.numPendingTests + report.numTodoTests,
    details,
  };
}

/** The failures in words, and how many spec files could not run at all. */
function read(report) {
  const details = [];
  let brokenSuites = 0;
  for (const suite of report.testResults.filter(({ status }) => status === 'failed')) {
    const file = path.relative(root, suite.name);
    const failures = suite.assertionResults.filter(({ status }) => status === 'failed');
    if (failures.length === 0) {
      brokenSuites++;
      details.push(`${file}: ${suite.message}`);
    }
    for (const { fullName, failureMessages } of failures) {
      details.push(`${file}: ${fullName}\n${failureMessages.join('\n')}`);
    }
  }
  return { details, brokenSuites };
}
