// `npm run check`: type check of every part, the components included. Prints what fails, then a line a part.
import { pathToFileURL } from 'node:url';
import { inRoot, packageCommand, runNode } from './process.mjs';
import { setUp } from './setup.mjs';

/** The parts, each a project of its own because each may use other globals. */
const PROJECTS = ['core', 'node', 'web', 'worker', 'test'];

/** @returns {Promise<{ name: string, ok: boolean, output: string }[]>} */
export async function typeChecks() {
  const tsc = packageCommand('typescript', 'tsc');
  const parts = PROJECTS.map((project) => [`types: ${project}`, tsc, ['-p', `tsconfig.${project}.json`]]);
  // The slowest first, so that it does not end alone.
  parts.unshift([
    'types: components',
    packageCommand('svelte-check'),
    ['--tsconfig', inRoot('tsconfig.web.json'), '--fail-on-warnings', '--output', 'human'],
  ]);
  const results = new Array(parts.length);
  let next = 0;
  const lane = async () => {
    while (next < parts.length) {
      const at = next++;
      const [name, script, args] = parts[at];
      const { code, output } = await runNode(script, args, { quiet: true });
      results[at] = { name, ok: code === 0, output };
    }
  };
  await Promise.all([lane(), lane()]);
  return results;
}

/** Shows results; true where all are well. */
export function showChecks(results) {
  for (const { name, ok, output } of results) {
    if (!ok) process.stdout.write(`${output.trimEnd()}\n`);
    process.stdout.write(`${ok ? 'ok    ' : 'FAILED'} ${name}\n`);
  }
  return results.every(({ ok }) => ok);
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) {
  await setUp([]);
  process.exitCode = showChecks(await typeChecks()) ? 0 : 1;
}
