// `npm test`: build, check, then every test; closes with one plain line that counts them all.
import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { checkAll } from './checks/run.ts';

const root = resolve(import.meta.dirname, '..');
const run = (script: string, args: readonly string[]) =>
  spawnSync(process.execPath, [join(root, 'node_modules', script), ...args], { cwd: root, stdio: 'inherit' }).status ===
  0;

const count = { passed: 0, failed: 0, skipped: 0 };
const built =
  run('assemblyscript/bin/asc.js', ['--config', 'src-core/kernels/source/asconfig.json']) &&
  run('electron-vite/bin/electron-vite.js', ['build', '--logLevel', 'warn']);
count[built ? 'passed' : 'failed']++;
console.log(`${built ? 'ok    ' : 'FAILED'} build`);

const checks = checkAll();
count.passed += checks.passed;
count.failed += checks.failed;

const scratch = mkdtempSync(join(tmpdir(), 'steelyard-tests-'));
const report = join(scratch, 'report.json');
const finished = run('vitest/vitest.mjs', [
  'run',
  '--reporter=default',
  '--reporter=json',
  `--outputFile.json=${report}`,
]);
try {
  const { numPassedTests, numFailedTests, numPendingTests, numTodoTests, testResults } = JSON.parse(
    readFileSync(report, 'utf8'),
  ) as {
    numPassedTests: number;
    numFailedTests: number;
    numPendingTests: number;
    numTodoTests: number;
    testResults: { status: string; assertionResults: unknown[] }[];
  };
  count.passed += numPassedTests;
  // A file that could not be loaded has no test of its own to fail.
  count.failed +=
    numFailedTests + testResults.filter((f) => f.status === 'failed' && f.assertionResults.length === 0).length;
  count.skipped += numPendingTests + numTodoTests;
} catch {
  count.failed++;
}
rmSync(scratch, { recursive: true, force: true });
if (!finished && count.failed === 0) count.failed++;

// On CI nothing is skipped: a skipped test counts as failed there.
if (process.env['CI']) {
  count.failed += count.skipped;
  count.skipped = 0;
}
console.log(`${count.passed} passed, ${count.failed} failed${count.skipped ? `, ${count.skipped} skipped` : ''}`);
process.exitCode = count.failed === 0 ? 0 : 1;
