/*
 * `npm test`: lint, types, build, all suites, each step timed. Ends with the totals.
 * The build comes before the suites, because the browser tests and some server tests drive the built application.
 */
import { spawnSync } from 'node:child_process';
import { existsSync, readFileSync, rmSync } from 'node:fs';

rmSync('test-results', { recursive: true, force: true });

/** @type {[string, string[]][]} */
const steps = [
  ['lint', ['npm', 'run', '-s', 'lint']],
  ['types', ['npm', 'run', '-s', 'check']],
  ['build', ['npm', 'run', '-s', 'build', '--', '--logLevel', 'warn']],
  ...['unit', 'reference', 'server'].map(
    (project) =>
      /** @type {[string, string[]]} */ ([
        project,
        [
          'npx',
          'vitest',
          'run',
          '--project',
          project,
          '--reporter=default',
          '--reporter=json',
          `--outputFile.json=test-results/${project}.json`
        ]
      ])
  ),
  ['browser', ['npx', 'playwright', 'test']]
];

const times = [];
let broken = '';
for (const [name, [command, ...args]] of steps) {
  console.log(`\n── ${name} ──`);
  const start = Date.now();
  const run = spawnSync(/** @type {string} */ (command), args, { stdio: 'inherit' });
  times.push(`${name} ${Math.round((Date.now() - start) / 1000)} s`);
  if (run.status !== 0) {
    broken = name;
    break;
  }
}

let passed = 0;
let failed = 0;
let skipped = 0;
for (const suite of ['unit', 'reference', 'server']) {
  const file = `test-results/${suite}.json`;
  if (!existsSync(file)) continue;
  const report = JSON.parse(readFileSync(file, 'utf8'));
  passed += report.numPassedTests;
  failed += report.numFailedTests;
  skipped += report.numPendingTests;
}
if (existsSync('test-results/browser.json')) {
  const { stats } = JSON.parse(readFileSync('test-results/browser.json', 'utf8'));
  passed += stats.expected;
  failed += stats.unexpected;
  skipped += stats.skipped;
}

console.log(`\n${times.join(' · ')}`);
if (broken) console.log(`Stopped at: ${broken}`);
console.log(`${passed} passed, ${failed || (broken ? 1 : 0)} failed, ${skipped} skipped`);
process.exit(broken ? 1 : 0);
