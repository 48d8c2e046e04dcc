// Packs the app round a stand-in for Electron's own files, which would be a download, and looks at what came out:
// the configuration is valid, app.asar holds what it should and nothing else.
import { chmodSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { inRoot } from './process.mjs';
import { setUp } from './setup.mjs';

const ALLOWED = /^\/(package\.json$|dist\/(node|preload|renderer)\/|app\/demo\/)/;
const NEEDED = [
  '/dist/node/cli.js',
  '/dist/node/worker.js',
  '/dist/node/desktop.js',
  '/dist/preload/preload.cjs',
  '/dist/renderer/index.html',
  '/app/demo/carbonyl/FCIDUMP',
  '/package.json',
];

/** @returns {Promise<{ name: string, ok: boolean, output: string }[]>} */
export async function packCheck() {
  const require = createRequire(import.meta.url);
  const { build, Platform } = require('electron-builder');
  const { listPackage, statFile } = await import('@electron/asar');
  const { version } = require('electron/package.json'); // never the package itself: that starts the download
  const work = mkdtempSync(join(tmpdir(), 'spinwright-pack-'));
  try {
    await build({
      projectDir: inRoot(),
      targets: Platform.LINUX.createTarget('dir'),
      publish: 'never',
      config: {
        extends: inRoot('build/electron-builder.yml'),
        electronDist: standIn(join(work, 'electron'), version),
        directories: { output: join(work, 'out') },
      },
    });
    const archive = join(work, 'out/linux-unpacked/resources/app.asar');
    const files = listPackage(archive)
      .map((path) => path.replaceAll('\\', '/'))
      .filter((path) => !('files' in statFile(archive, path.slice(1))));
    const strangers = files.filter((path) => !ALLOWED.test(path));
    const missing = NEEDED.filter((path) => !files.includes(path));
    const output = [
      ...strangers.map((path) => `not wanted: ${path}`),
      ...missing.map((path) => `missing: ${path}`),
    ];
    return [{ name: 'installer contents', ok: output.length === 0, output: output.join('\n') }];
  } catch (error) {
    return [{ name: 'installer contents', ok: false, output: String(error.stack) }];
  } finally {
    rmSync(work, { recursive: true, force: true });
  }
}

function standIn(folder, version) {
  mkdirSync(join(folder, 'locales'), { recursive: true });
  mkdirSync(join(folder, 'resources'));
  writeFileSync(join(folder, 'version'), version);
  for (const name of ['LICENSE', 'LICENSES.chromium.html', 'locales/en-US.pak'])
    writeFileSync(join(folder, name), '');
  writeFileSync(join(folder, 'electron'), '#!/bin/sh\n');
  chmodSync(join(folder, 'electron'), 0o755);
  return folder;
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) {
  await setUp();
  const { showChecks } = await import('./check.mjs');
  process.exitCode = showChecks(await packCheck()) ? 0 : 1;
}
