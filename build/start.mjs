// `npm start [-- --desktop] [FILES…]`: opens the demo, or the named files, in the best window there is, else
// prints the comparison in the terminal. Says which of the three and why.
import { spawn } from 'node:child_process';
import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import { findBrowser, sandboxFlags } from './browser.mjs';
import { chooseShell } from './choose-shell.mjs';
import { inRoot, packageCommand, ROOT, run, runNode } from './process.mjs';
import { ensureDependencies, setUp } from './setup.mjs';

const say = (text) => process.stderr.write(`${text}\n`);
const args = process.argv.slice(2);
const desktopAsked = args.includes('--desktop');
const files = args.filter((arg) => arg !== '--desktop');

await ensureDependencies();
const { shell, why } = chooseShell({
  platform: process.platform,
  env: process.env,
  desktopAsked,
  electron: electronRuntime(),
  browser: findBrowser(),
});
say(
  `Opening in the ${{ desktop: 'desktop window', browser: 'browser', terminal: 'terminal' }[shell]}: ${why}`,
);
process.exitCode = await { desktop, browser, terminal }[shell]();

/** The runtime is a download of its own beside the package; without it the package is types and a loader. */
function electronRuntime() {
  const name = inRoot('node_modules/electron/path.txt');
  if (!existsSync(name)) return null;
  const path = inRoot('node_modules/electron/dist', readFileSync(name, 'utf8').trim());
  return existsSync(path) ? path : null;
}

async function desktop() {
  await setUp(['node', 'preload', 'renderer']);
  const flags = process.platform === 'linux' ? sandboxFlags() : [];
  if (flags.length > 0) say('Running as root: the sandbox of the window is off.');
  return (await runNode(packageCommand('electron'), [...flags, ROOT, ...files])).code;
}

async function browser() {
  await setUp(['node', 'renderer']);
  const server = spawn(process.execPath, [inRoot('dist/node/shell.js'), ...files], {
    cwd: ROOT,
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  const ended = new Promise((resolve) => server.once('close', (code) => resolve(code ?? 1)));
  const url = await Promise.race([firstLine(server.stdout), ended.then(() => null)]);
  if (url === null) return ended;

  const profile = mkdtempSync(join(tmpdir(), 'spinwright-'));
  const flags = sandboxFlags();
  if (flags.length > 0) say('Running as root: the sandbox of the browser is off.');
  const window = run(
    findBrowser(),
    [`--app=${url}`, `--user-data-dir=${profile}`, '--no-first-run', '--no-default-browser-check', ...flags],
    { quiet: true },
  );
  say(`If no window opens, open ${url}`);
  const stop = () => server.kill();
  process.once('SIGINT', stop);
  process.once('SIGTERM', stop);
  const { code, output } = await window;
  if (code !== 0) say(`The browser ended with status ${code}: ${output.trim().split('\n').pop()}`);
  // The server ends by itself when no page has been heard of for a while: the page may have moved to a window
  // of a browser that was running already.
  const status = await ended;
  rmSync(profile, { recursive: true, force: true });
  return status;
}

async function terminal() {
  await setUp(['node']);
  const command = files.length === 0 ? ['demo'] : ['compare', ...files, '--target', '5cm-1'];
  return (await runNode(inRoot('dist/node/cli.js'), command)).code;
}

/** The first line a stream gives. */
function firstLine(stream) {
  return new Promise((resolve) => createInterface({ input: stream }).once('line', resolve));
}
