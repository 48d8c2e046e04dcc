// Brings a checkout into a state in which it can run: dependencies, kernels, bundles. Only what is missing or
// stale is done, silently; what fails is shown. Node built-ins only, since nothing is installed at first.
import { existsSync, mkdirSync, readdirSync, renameSync, rmSync, statSync, utimesSync } from 'node:fs';
import { dirname, join, relative, sep } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { pathToFileURL } from 'node:url';
import { inRoot, packageCommand, run, runNode } from './process.mjs';
import { fingerprint, isStale, writeStamp } from './stale.mjs';

const say = (text) => process.stderr.write(`${text}\n`);

class SetupError extends Error {}

/** Installs with `npm ci` where node_modules is missing or older than the lock file. */
export async function ensureDependencies() {
  const installed = statSync(inRoot('node_modules/.package-lock.json'), { throwIfNoEntry: false });
  if (installed && installed.mtimeMs >= statSync(inRoot('package-lock.json')).mtimeMs) return;
  say('Installing dependencies (npm ci) …');
  const npm = process.platform === 'win32' ? 'npm.cmd' : 'npm';
  await must('npm ci', run(npm, ['ci', '--no-audit', '--no-fund', '--loglevel=error'], { quiet: true }));
  // npm may leave the time of an older install on its own copy of the lock file.
  const now = new Date();
  utimesSync(inRoot('node_modules/.package-lock.json'), now, now);
}

/** Compiles the WebAssembly kernels into core/linalg/kernels/wasm-bytes.ts. */
export async function ensureKernels() {
  const sources = ['build/kernels.mjs', 'core/linalg/kernels', 'package-lock.json'];
  const output = inRoot('core/linalg/kernels/wasm-bytes.ts');
  const stamp = inRoot('dist/.stamps/kernels');
  const print = fingerprint(sources, ['wasm-bytes.ts']);
  if (existsSync(output) && !isStale(stamp, print)) return;
  await must('the kernels', runNode(inRoot('build/kernels.mjs'), [], { quiet: true }));
  writeStamp(stamp, print);
}

const COMMON = ['core', 'package-lock.json', 'tsconfig.base.json'];
/** What each bundle is made from. */
const BUNDLES = {
  node: { config: 'vite.node.config.ts', sources: [...COMMON, 'app', 'package.json', 'vite.node.config.ts'] },
  preload: {
    config: 'vite.preload.config.ts',
    sources: ['app/desktop', 'package-lock.json', 'vite.preload.config.ts'],
  },
  renderer: {
    config: 'vite.config.ts',
    sources: [...COMMON, 'renderer', 'app/demo', 'svelte.config.js', 'vite.config.ts'],
  },
};

/**
 * Builds the named bundles where their sources changed since the last time.
 * @param {('node' | 'preload' | 'renderer')[]} names
 */
export async function ensureBuilt(names = ['node', 'preload', 'renderer']) {
  for (const name of names) {
    if (!isStale(stampOf(name), fingerprint(BUNDLES[name].sources))) continue;
    await withLock(() => buildOne(name));
  }
}

async function buildOne(name) {
  const print = fingerprint(BUNDLES[name].sources); // before the build: an edit during it makes it stale again
  if (!isStale(stampOf(name), print)) return; // another process was faster
  const fresh = inRoot(`dist/.new-${name}`);
  const vite = packageCommand('vite');
  const args = [
    'build',
    '--config',
    BUNDLES[name].config,
    '--outDir',
    fresh,
    '--emptyOutDir',
    '--logLevel',
    'warn',
  ];
  await must(`the bundle "${name}"`, runNode(vite, args, { quiet: true, env: { NODE_ENV: 'production' } }));
  replaceFiles(fresh, inRoot('dist', name));
  writeStamp(stampOf(name), print);
}

/**
 * Moves a fresh bundle over the old one, file by file, so that a program that starts meanwhile finds every file:
 * first what is named after its contents (chunks, assets), then the rest, and last goes what is left of the old.
 */
function replaceFiles(fresh, target) {
  const files = readdirSync(fresh, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => relative(fresh, join(entry.parentPath, entry.name)))
    .sort((a, b) => depth(b) - depth(a));
  for (const file of files) {
    mkdirSync(dirname(join(target, file)), { recursive: true });
    renameSync(join(fresh, file), join(target, file));
  }
  for (const entry of readdirSync(target, { recursive: true, withFileTypes: true })) {
    const file = relative(target, join(entry.parentPath, entry.name));
    if (entry.isFile() && !files.includes(file)) rmSync(join(target, file));
  }
  rmSync(fresh, { recursive: true, force: true });
}

const depth = (file) => file.split(sep).length;

const stampOf = (name) => inRoot('dist/.stamps', name);

/** One build at a time, also across processes. A lock older than five minutes belongs to a dead process. */
async function withLock(work) {
  const lock = inRoot('dist/.lock');
  mkdirSync(inRoot('dist'), { recursive: true });
  for (;;) {
    try {
      mkdirSync(lock);
      break;
    } catch (error) {
      if (error.code !== 'EEXIST') throw error;
      const age = Date.now() - (statSync(lock, { throwIfNoEntry: false })?.mtimeMs ?? 0);
      if (age > 300_000) rmSync(lock, { recursive: true, force: true });
      else await sleep(200);
    }
  }
  const release = () => rmSync(lock, { recursive: true, force: true });
  process.once('exit', release);
  try {
    return await work();
  } finally {
    release();
    process.removeListener('exit', release);
  }
}

async function must(what, running) {
  const { code, output } = await running;
  if (code !== 0) throw new SetupError(`${output.trimEnd()}\nCould not make ${what} (status ${code}).`);
}

/** Everything a command needs before it can run. Ends the process with a clear message where that fails. */
export async function setUp(bundles) {
  try {
    await ensureDependencies();
    await ensureKernels();
    await ensureBuilt(bundles);
  } catch (error) {
    say(error instanceof SetupError ? error.message : String(error.stack));
    process.exit(1);
  }
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) await setUp();
