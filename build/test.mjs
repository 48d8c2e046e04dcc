// `npm test [-- FILTER]`: set-up, type check, lint, unit, property and published tests, bundles, browser tests.
// With a filter word only the vitest files whose path contains it run.
import { existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs';
import { relative } from 'node:path';
import { findBrowser, NO_BROWSER } from './browser.mjs';
import { showChecks, typeChecks } from './check.mjs';
import { lintChecks } from './lint.mjs';
import { packCheck } from './pack-check.mjs';
import { inRoot, packageCommand, ROOT, runNode } from './process.mjs';
import { ensureBuilt, setUp } from './setup.mjs';

const filters = process.argv.slice(2).filter((word) => !word.startsWith('-'));
const passed = [];
const failed = [];
const skipped = [];

await setUp([]); // dependencies and kernels: the type check needs both

if (filters.length === 0) {
  heading('Type check');
  count(await typeChecks());
  heading('Lint');
  count(await lintChecks());
}

heading('Bundles');
count(await bundles());
if (filters.length === 0 && failed.every((name) => name !== 'bundles')) count(await packCheck());

heading('Tests');
await vitest(['core', 'ui'], filters);
const browser = findBrowser();
if (browser || filters.length > 0) await vitest(['e2e'], filters);
else count([{ name: 'browser tests', ok: false, output: NO_BROWSER }]);
if (filters.length > 0 && passed.length + failed.length <= 1) {
  count([{ name: `tests matching ${filters.join(' ')}`, ok: false, output: 'no test file matches' }]);
}

summary();

function heading(text) {
  process.stdout.write(`\n── ${text}\n`);
}

function count(results) {
  showChecks(results);
  for (const { name, ok } of results) (ok ? passed : failed).push(name);
}

async function bundles() {
  try {
    await ensureBuilt();
    return [{ name: 'bundles', ok: true, output: '' }];
  } catch (error) {
    return [{ name: 'bundles', ok: false, output: error.message }];
  }
}

/** Runs vitest on the projects and books every test of its JSON report. */
async function vitest(projects, words) {
  const report = inRoot('dist/reports', `${projects.join('-')}.json`);
  mkdirSync(inRoot('dist/reports'), { recursive: true });
  rmSync(report, { force: true });
  const { code } = await runNode(packageCommand('vitest'), [
    'run',
    ...projects.flatMap((project) => ['--project', project]),
    '--reporter=default',
    '--reporter=json',
    `--outputFile.json=${report}`,
    '--passWithNoTests',
    ...words,
  ]);
  const before = failed.length;
  if (existsSync(report)) book(JSON.parse(readFileSync(report, 'utf8')));
  // A crash of the runner itself, or an error outside any test, is in no test's record.
  if (code !== 0 && failed.length === before)
    failed.push(`vitest ${projects.join(' ')} ended with status ${code}`);
}

function book({ testResults }) {
  for (const file of testResults) {
    const name = relative(ROOT, file.name).replaceAll('\\', '/');
    // A file that fails to load has no test to carry the failure.
    if (file.status === 'failed' && file.assertionResults.every((test) => test.status !== 'failed'))
      failed.push(name);
    for (const test of file.assertionResults) {
      const list = test.status === 'passed' ? passed : test.status === 'failed' ? failed : skipped;
      list.push(`${name}: ${test.fullName}`);
    }
  }
}

function summary() {
  heading('Summary');
  for (const name of skipped) process.stdout.write(`skipped ${name}\n`);
  for (const name of failed) process.stdout.write(`FAILED  ${name}\n`);
  if (skipped.length > 0) process.stdout.write(`${skipped.length} skipped\n`);
  process.stdout.write(`${passed.length} passed, ${failed.length} failed\n`);
  process.exitCode = failed.length === 0 ? 0 : 1;
}
