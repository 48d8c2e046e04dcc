// `npm run bench -- NAME ARGS…`: bundles test/bench/NAME/main.ts with the command line's worker and runs it.
import { existsSync, readdirSync } from 'node:fs';
import { inRoot, ROOT, runNode } from './process.mjs';
import { setUp } from './setup.mjs';

const [name, ...args] = process.argv.slice(2);
const folder = inRoot('test/bench');
const known = existsSync(folder)
  ? readdirSync(folder).filter((entry) => existsSync(inRoot('test/bench', entry, 'main.ts')))
  : [];
if (!known.includes(name)) {
  process.stderr.write(
    `${name ?? 'no benchmark named'}: expected one of ${known.join(', ') || 'none yet'}\n`,
  );
  process.exit(2);
}

await setUp([]);
const { build, loadConfigFromFile, mergeConfig } = await import('vite');
const { config } = await loadConfigFromFile(
  { command: 'build', mode: 'production' },
  inRoot('vite.node.config.ts'),
);
const outDir = inRoot('dist/bench', name);
const own = {
  root: ROOT,
  configFile: false,
  logLevel: 'warn',
  build: { outDir },
};
const merged = mergeConfig(config, own);
merged.build.rolldownOptions.input = { main: `test/bench/${name}/main.ts`, worker: 'app/cli/worker.ts' };
await build(merged);
const { code } = await runNode(inRoot('dist/bench', name, 'main.js'), args);
process.exitCode = code;
