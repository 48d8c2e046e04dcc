// `npm run lint`: formatting and lint rules (Biome), then the dependency law (build/arrows.cjs).
// `--root DIR` checks the arrows of another tree: the tests use it on trees that break the law.
import { existsSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { pathToFileURL } from 'node:url';
import { showChecks } from './check.mjs';
import { inRoot, packageCommand, ROOT, runNode } from './process.mjs';
import { setUp } from './setup.mjs';

/** @returns {Promise<{ name: string, ok: boolean, output: string }[]>} */
export async function lintChecks(root = ROOT) {
  const results = [];
  if (root === ROOT) {
    const { code, output } = await runNode(
      packageCommand('@biomejs/biome', 'biome'),
      ['check', '--error-on-warnings', '--max-diagnostics=50'],
      { quiet: true },
    );
    results.push({ name: 'lint: style and rules', ok: code === 0, output });
  }
  const folders = ['core', 'app', 'renderer'].filter((folder) => existsSync(join(root, folder)));
  const { code, output } = await runNode(
    packageCommand('dependency-cruiser', 'depcruise'),
    ['--config', inRoot('build/arrows.cjs'), '--output-type', 'err', ...folders],
    { quiet: true, cwd: root },
  );
  results.push({ name: 'lint: dependency law', ok: code === 0, output });
  return results;
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) {
  const at = process.argv.indexOf('--root');
  await setUp([]);
  const results = await lintChecks(at < 0 ? ROOT : resolve(process.argv[at + 1]));
  process.exitCode = showChecks(results) ? 0 : 1;
}
