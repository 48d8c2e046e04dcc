import { type ChildProcess, spawn } from 'node:child_process';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import { type Browser, chromium, type Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { findBrowser, sandboxFlags } from '../../build/browser.mjs';
import { ensureBuilt, ensureKernels } from '../../build/setup.mjs';
import { CORPUS, handedOver, inputOf, manifest, type Row } from '../unit/corpus/manifest';

/** Four times the limit, since the machine may be busy with other tests. */
const WATCHDOG_MS = 4 * 1000 * manifest.limits.seconds;

/**
 * Those that claim to be huge, and all of HDF5: a Blob is mounted only inside a browser's worker. The others go
 * through the same worker code in test/unit/corpus; SPINWRIGHT_CORPUS=all takes them here too. What only a choice
 * of terms makes wrong is not shown where files are read.
 */
const rows = manifest.errors.filter(
  (row) =>
    !row.command.includes('--terms') &&
    (row.spawn || /^(hdf5|trexio)\//.test(row.path) || process.env.SPINWRIGHT_CORPUS === 'all'),
);

let server: ChildProcess;
let browser: Browser;
let page: Page;
const faults: string[] = [];

beforeAll(async () => {
  await ensureKernels();
  await ensureBuilt(['node', 'renderer']);
  server = spawn(process.execPath, ['dist/node/shell.js', '--empty'], {
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  const url = await new Promise<string>((resolve) =>
    createInterface({ input: server.stdout! }).once('line', resolve),
  );
  const executablePath = findBrowser();
  if (executablePath === null) throw new Error('no browser');
  browser = await chromium.launch({ executablePath, args: sandboxFlags() });
  page = await browser.newPage({ viewport: { width: 1280, height: 800 } });
  page.on('pageerror', (error) => faults.push(String(error)));
  page.on('console', (message) => {
    if (message.type() === 'error') faults.push(message.text());
  });
  await page.goto(url);
}, 300_000);

afterAll(async () => {
  await browser?.close();
  server?.kill();
});

/** Hands the row's files over as a user does, in the dialog of Load. */
async function choose(row: Row): Promise<void> {
  const { paths, chosenOneByOne } = handedOver(row);
  const chooser = page.waitForEvent('filechooser');
  await page.getByRole('button', { name: chosenOneByOne ? 'Choose files' : 'Choose folder' }).click();
  const files = chosenOneByOne ? paths.map((path) => join(CORPUS, path)) : join(CORPUS, inputOf(row));
  await (await chooser).setFiles(files);
}

describe('malformed files in a browser', () => {
  it.each(rows.map((row) => [`${row.path}: ${row.damage}`, row] as const))('%s', async (_name, row) => {
    await choose(row);
    const alert = page
      .getByRole('alert')
      .filter({ hasText: row.what })
      .filter({ hasText: row.where })
      .filter({ hasText: row.cure });
    await alert.first().waitFor({ timeout: WATCHDOG_MS });
    expect(await alert.first().locator('dt').allTextContents()).toEqual([
      'What',
      'Where',
      'Expected',
      'Cure',
    ]);
    for (const part of await alert.first().locator('dd').allTextContents()) expect(part.trim()).not.toBe('');
    expect(faults).toEqual([]);
  });

  it('reads a sound file after one that was refused', async () => {
    await choose(manifest.errors.find(({ path }) => path === 'fcidump/index-too-large.fcidump')!);
    await page.getByRole('alert').filter({ hasText: 'index 3' }).waitFor();
    const chooser = page.waitForEvent('filechooser');
    await page.getByRole('button', { name: 'Choose files' }).click();
    await (await chooser).setFiles(join(CORPUS, 'fcidump/h2.fcidump'));
    await page.getByRole('row', { name: /h2\.fcidump/ }).waitFor({ timeout: WATCHDOG_MS });
    expect(await page.getByRole('alert').count()).toBe(0);
    expect(faults).toEqual([]);
  });
});
