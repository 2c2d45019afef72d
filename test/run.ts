// npm test: types and lint, then every test project with the browser last, then one line that sums it all up.
// Arguments are passed on to vitest: `npm test -- test/lib/units.test.ts` runs one file (and no check).
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { run, vitestEntry } from './support/run-tool.ts';

interface Counts {
  readonly passed: number;
  readonly failed: number;
}

/** What the json reporter wrote. A file that failed to load holds no test, and counts as one failure. */
function readCounts(file: string): Counts {
  const report = JSON.parse(readFileSync(file, 'utf8')) as {
    numPassedTests: number;
    numFailedTests: number;
    testResults: { status: string; assertionResults: { status: string }[] }[];
  };
  const brokenFiles = report.testResults.filter(
    (result) => result.status === 'failed' && !result.assertionResults.some((test) => test.status === 'failed'),
  );
  return { passed: report.numPassedTests, failed: report.numFailedTests + brokenFiles.length };
}

const passedOn = process.argv.slice(2);
const folder = mkdtempSync(path.join(tmpdir(), 'dawnmargin-test-'));
const reportFile = path.join(folder, 'report.json');

const checkCode = passedOn.length > 0 ? 0 : await run(path.join(import.meta.dirname, 'check.ts'), []);
const testCode = await run(vitestEntry, [
  'run',
  '--config=test/vitest.config.ts',
  '--reporter=default',
  '--reporter=json',
  `--outputFile.json=${reportFile}`,
  ...passedOn,
]);

let counts: Counts;
try {
  counts = readCounts(reportFile);
} catch {
  counts = { passed: 0, failed: 1 };
}
rmSync(folder, { recursive: true, force: true });

// A check or a runner that failed without naming a test is a failure too; so is a run without a test.
const failed = counts.failed + (checkCode === 0 ? 0 : 1) + (testCode !== 0 && counts.failed === 0 ? 1 : 0);
if (checkCode !== 0) console.error('\nnpm run check failed: see the top of this output.');
if (counts.passed + failed === 0) console.error('\nNo test ran.');
console.log(`\n${counts.passed} passed, ${failed} failed`);
process.exitCode = failed > 0 || counts.passed === 0 ? 1 : 0;
