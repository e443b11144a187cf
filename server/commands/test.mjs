// `npm test`: everything, with one closing line `N passed, N failed`.
import { existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs';
import { findChromium, installChromium } from './chromium.mjs';
import { prepare, step } from './steps.mjs';

prepare({ build: true });
const chromium = findChromium() ?? installChromium();
rmSync('test-results', { recursive: true, force: true });
mkdirSync('test-results', { recursive: true });

const totals = { passed: 0, failed: 0 };

const vitestReport = 'test-results/vitest.json';
const vitestFine = step(
  'Unit and service tests',
  'npx',
  ['--no-install', 'vitest', 'run', '--reporter=default', '--reporter=json', `--outputFile.json=${vitestReport}`],
  { tolerate: true },
);
count(vitestReport, vitestFine, (report) => ({
  passed: report.numPassedTests,
  failed: report.numFailedTests + failedSuites(report),
}));

const browserReport = 'test-results/browser.json';
const browserFine = step('Browser tests', 'npx', ['--no-install', 'playwright', 'test'], {
  tolerate: true,
  env: { CHROMIUM_PATH: chromium, PLAYWRIGHT_JSON_OUTPUT_NAME: browserReport },
});
count(browserReport, browserFine, (report) => ({
  passed: report.stats.expected,
  failed: report.stats.unexpected + report.stats.flaky + report.errors.length,
}));

process.stdout.write(`${totals.passed} passed, ${totals.failed} failed\n`);
process.exit(totals.failed === 0 && vitestFine && browserFine ? 0 : 1);

/** A runner that died without a report, or failed without a failed test, counts as one failure. */
function count(file, fine, read) {
  const found = existsSync(file) ? read(JSON.parse(readFileSync(file, 'utf8'))) : { passed: 0, failed: 1 };
  totals.passed += found.passed;
  totals.failed += found.failed === 0 && !fine ? 1 : found.failed;
}

function failedSuites(report) {
  return report.testResults.filter(
    (suite) => suite.status === 'failed' && suite.assertionResults.every((test) => test.status !== 'failed'),
  ).length;
}
