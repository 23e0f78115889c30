/** Runs the groups of tests one after the other, prints the time of each, fails on a group without tests. */
import { spawnSync } from 'node:child_process';
import { mkdirSync, readFileSync, rmSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { join } from 'node:path';

const root = fileURLToPath(new URL('..', import.meta.url));
const GROUPS = [
  ['rules', ['tests/architecture/']],
  ['packages', ['packages/']],
  ['apps', ['apps/']],
  ['published values and oracles', ['tests/search/', 'tests/checker/', 'tests/oracle/', 'tests/published/']],
  ['command line', ['tests/cli/']],
  ['store and server', ['tests/store/', 'tests/server/']],
  ['station and faults', ['tests/station/', 'tests/faults/']],
  ['browser', ['tests/browser/']],
];

const wanted = process.argv.slice(2);
const reports = join(root, '.palmette/reports');
rmSync(reports, { recursive: true, force: true });
mkdirSync(reports, { recursive: true });

let failed = false;
const lines = [];
for (const [name, paths] of GROUPS) {
  if (wanted.length > 0 && !wanted.some((w) => name.includes(w))) continue;
  const report = join(reports, `${name.replaceAll(' ', '-')}.json`);
  const began = Date.now();
  process.stdout.write(`\n== ${name}\n`);
  const run = spawnSync(
    'npx',
    [
      'vitest',
      'run',
      '--config',
      'tests/vitest.config.ts',
      '--reporter=default',
      '--reporter=json',
      `--outputFile.json=${report}`,
      ...paths,
    ],
    { cwd: root, stdio: 'inherit' },
  );
  const { numPassedTests = 0, numFailedTests = 0, numTotalTests = 0 } = readReport(report);
  const bad = run.status !== 0 || numTotalTests === 0 || numPassedTests !== numTotalTests;
  failed ||= bad;
  lines.push(
    `${bad ? 'FAILED' : 'passed'}  ${name}: ${numPassedTests} of ${numTotalTests} tests${numFailedTests > 0 ? `, ${numFailedTests} failed` : ''}, ${Math.round((Date.now() - began) / 1000)} s`,
  );
}
process.stdout.write(`\n${lines.join('\n')}\n`);
const total = lines.reduce((sum, line) => sum + Number(/: (\d+) of/.exec(line)?.[1] ?? 0), 0);
process.stdout.write(`${failed ? 'FAILED' : 'ALL PASSED'}: ${total} tests in ${lines.length} groups\n`);
process.exit(failed ? 1 : 0);

function readReport(file) {
  try {
    return JSON.parse(readFileSync(file, 'utf8'));
  } catch {
    return {};
  }
}
