import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { nodeReadPlatform } from '../../app/cli/hdf5';
import { loadIntegrals, resolveInputs } from '../../core/integrals';
import { inlineContext } from '../../core/job';
import { runComparison } from '../../core/plan';
import { readSet, setFolder } from '../fixtures/sets/read-set';
import { goTo, launchBrowser, type OpenWindow, openWindow, type WindowOptions, waitForFact } from './browser';

const SET = setFolder('oh_sto3g');
let browser: Browser;
let open: OpenWindow | null = null;
let folder: string;

beforeAll(async () => {
  browser = await launchBrowser();
  folder = mkdtempSync(join(tmpdir(), 'window-'));
});
afterAll(async () => {
  await browser?.close();
  rmSync(folder, { recursive: true, force: true });
});
afterEach(async () => {
  const complaints = open?.complaints ?? [];
  await open?.close();
  open = null;
  expect(complaints).toEqual([]);
});

async function start(options: WindowOptions = {}): Promise<Page> {
  open = await openWindow(browser, options);
  return open.page;
}

/** The table as it is saved: one array of cells a line. */
async function savedTable(page: Page): Promise<string[][]> {
  await page.getByRole('button', { name: 'Copy table' }).click();
  const [download] = await Promise.all([
    page.waitForEvent('download'),
    page
      .getByRole('group', { name: 'Copy table' })
      .getByText('CSV:')
      .getByRole('button', { name: 'save' })
      .click(),
  ]);
  expect(download.suggestedFilename()).toBe('ledger.csv');
  const path = join(folder, 'ledger.csv');
  await download.saveAs(path);
  await page.getByRole('button', { name: 'Close' }).click();
  const cell = /"((?:[^"]|"")*)"|([^,]+)|(?<=,)(?=,|$)/g;
  return readFileSync(path, 'utf8')
    .trim()
    .split('\r\n')
    .map((line) => [...line.matchAll(cell)].map((m) => m[1]?.replaceAll('""', '"') ?? m[2] ?? ''));
}

describe('the window in a browser', () => {
  it('says at every stop what it lacks', async () => {
    const page = await start();
    for (const [stop, sentence] of [
      ['Load', 'No integrals yet. Drop files here or use the demo.'],
      ['Terms', 'The terms come from the files, and there are none yet.'],
      ['Target', 'one level to 5 cm⁻¹ rms'],
      ['Variants', 'Reckoning needs integrals.'],
      ['Ledger', 'No integrals yet.'],
      ['Proof', 'There is nothing to check yet.'],
    ] as const) {
      await goTo(page, stop);
      expect(await page.getByRole('main').textContent()).toContain(sentence);
      expect(await page.getByRole('main').getByRole('button').count(), stop).toBeGreaterThan(
        stop === 'Target' ? -1 : 0,
      );
    }
  });

  it('loads a real set, runs, is stopped, runs again, and its table is what the core computes', async () => {
    const page = await start();
    const [chooser] = await Promise.all([
      page.waitForEvent('filechooser'),
      page.getByRole('button', { name: 'Choose folder' }).click(),
    ]);
    // The larger set: its reckoning takes seconds, so that a stop comes in the middle of it.
    await chooser.setFiles(setFolder('ch2o_sto3g_8o'));
    await waitForFact(page, 'Load', /8 orbitals/);
    await page.getByRole('button', { name: /^Reckon 8/ }).click();
    await page.getByRole('button', { name: 'Stop job' }).click();
    await page.getByRole('button', { name: 'Stop job' }).waitFor({ state: 'detached', timeout: 5_000 });
    await waitForFact(page, 'Variants', /8 chosen, \d done/);
    await goTo(page, 'Variants');
    expect(await page.getByRole('main').textContent()).toContain('stopped');

    await page
      .getByRole('main')
      .getByRole('button', { name: /^Reckon/ })
      .click();
    await waitForFact(page, 'Variants', /8 of 8 done/);
    await goTo(page, 'Ledger');
    const table = await savedTable(page);

    const { recipe, files } = await resolveInputs(
      { files: readSet('ch2o_sto3g_8o') },
      nodeReadPlatform,
      inlineContext(),
    );
    const set = await loadIntegrals(recipe, files, nodeReadPlatform, inlineContext());
    const { comparison } = await runComparison(
      set,
      {
        terms: 'all',
        electrons: null,
        occupations: null,
        target: { value: 5, unit: 'cm-1', meaning: 'level' },
        variants: null,
        threshold: 0,
        bits: 'auto',
        overlaps: [1],
        qubitsMax: null,
      },
      inlineContext(),
    );
    const row = (label: string) =>
      table
        .find((line) => line[0] === label)!
        .slice(1)
        .map(Number);
    const ascending = (values: readonly number[]) => [...values].sort((a, b) => a - b);
    expect(ascending(row('Toffoli, one run'))).toEqual(
      ascending(comparison.variants.map((v) => v.totalToffoli)),
    );
    expect(ascending(row('Logical qubits'))).toEqual(
      ascending(comparison.variants.map((v) => v.logicalQubits)),
    );
    const lambdas = ascending(comparison.variants.map((v) => v.lambda.total));
    ascending(row('λ, all parts (Eh)')).forEach((value, i) => {
      expect(Math.abs(value / lambdas[i]! - 1)).toBeLessThan(1e-12);
    });
    // The leader in the window is the one the core recommends.
    const cheapest = comparison.variants.find((v) => v.name === comparison.recommendation.variant)!;
    expect(Math.min(...row('Toffoli, one run'))).toBe(cheapest.totalToffoli);
  });

  it('prints once what both ways to treat spin share, and walks through the figures by keys', async () => {
    const page = await start({ named: [SET] });
    await waitForFact(page, 'Variants', /8 of 8 done/);
    const grid = page.getByRole('grid');
    const pairs = await grid.locator('thead th[colspan="3"]').count();
    expect(pairs).toBe(2);
    for (const label of ['λ, all parts', 'Walk steps'])
      expect(await grid.getByRole('row', { name: label }).locator('td[colspan="3"]').count(), label).toBe(
        pairs,
      );
    const seams = await grid.getByRole('row', { name: 'Toffoli a step' }).locator('.seam').allTextContents();
    expect(seams).toHaveLength(pairs);
    for (const seam of seams) expect(seam).toMatch(/^[−+]\d+\.\d %$/);

    await grid.locator('td[tabindex="0"]').focus();
    await page.keyboard.press('Home');
    const name = () => page.evaluate(() => document.activeElement?.getAttribute('aria-label') ?? '');
    const first = await name();
    expect(first).toMatch(/^Toffoli a step [\d\u202f]+/);
    await page.keyboard.press('ArrowRight');
    expect(await name()).toMatch(/percent (less|more) than in index/);
    await page.keyboard.press('x');
    expect(await name()).toBe(first);
    await page.keyboard.press('ArrowDown');
    expect(await name()).toMatch(/^T gates a step/);
    await page.keyboard.press('ArrowUp');
    expect(await page.getByRole('region', { name: 'Reckoning' }).textContent()).toContain('= look-up');
    await page.keyboard.press('Enter');
    const slip = page.getByRole('region', { name: 'Full reckoning' });
    expect(await slip.getByRole('row').count()).toBeGreaterThan(3);
    await page.keyboard.press('Escape');
    await slip.waitFor({ state: 'detached' });
    await page.keyboard.press('h');
    expect(await grid.locator('thead th[colspan="3"]').count()).toBe(pairs - 1);
  });

  it('follows a changed target at once, and the copied table with it', async () => {
    const page = await start({ named: [SET] });
    await waitForFact(page, 'Variants', /8 of 8 done/);
    const stepsOf = async () => {
      const table = await savedTable(page);
      const steps = table.find((line) => line[0] === 'Walk steps')!;
      return table[0]!.map((head, i) => ({ head, steps: Number(steps[i]) })).slice(1);
    };
    const before = await stepsOf();
    await page.keyboard.press('3');
    await page.getByLabel('Resolution').fill('2.5 cm-1');
    // What a mixed encoding leaves out depends on the target: that one is reckoned again, the others are counted anew.
    await goTo(page, 'Variants');
    await page.getByRole('button', { name: /^Reckon 1/ }).click();
    await waitForFact(page, 'Variants', /8 of 8 done/);
    await goTo(page, 'Ledger');
    const after = await stepsOf();
    expect(after).toHaveLength(8);
    for (const { head, steps } of after) {
      const old = before.find((column) => column.head === head)!.steps;
      // ⌈πλ/2ε⌉ with half the target: twice the steps, up to rounding up once.
      if (head.startsWith('Mixed')) expect(steps / old).toBeCloseTo(2, 2);
      else expect(Math.abs(steps - 2 * old)).toBeLessThanOrEqual(1);
    }
  });

  it('checks encoded against exact levels', async () => {
    const page = await start({ named: [SET] });
    await waitForFact(page, 'Variants', /8 of 8 done/);
    await goTo(page, 'Proof');
    await page.getByRole('button', { name: 'Check the encodings' }).click();
    await waitForFact(page, 'Proof', /hold/);
    const main = await page.getByRole('main').textContent();
    expect(main).toMatch(/[1-9]\d* hold, 0 fail/);
    expect(main).toContain('sparse/-/index/optimised/clean');
  });

  it('shows a broken file in four parts and reads the next one', async () => {
    const broken = join(folder, 'FCIDUMP');
    writeFileSync(broken, ' &FCI NORB=2,NELEC=2,\n &END\n 0.5 1 1 3 1\n');
    const page = await start();
    const choose = async (path: string) => {
      const [chooser] = await Promise.all([
        page.waitForEvent('filechooser'),
        page.getByRole('button', { name: 'Choose files' }).click(),
      ]);
      await chooser.setFiles(path);
    };
    await choose(broken);
    const alert = page.getByRole('alert');
    await alert.waitFor();
    const text = await alert.textContent();
    expect(text).toContain('FCIDUMP:3');
    for (const part of ['What', 'Where', 'Expected', 'Cure']) expect(text).toContain(part);
    await choose(join(SET, 'FCIDUMP'));
    await waitForFact(page, 'Load', /1 array, 5 orbitals/);
  });

  it('reads a dropped file', async () => {
    const page = await start();
    const text = readFileSync(join(SET, 'FCIDUMP'), 'utf8');
    const transfer = await page.evaluateHandle((content) => {
      const data = new DataTransfer();
      data.items.add(new File([content], 'FCIDUMP'));
      return data;
    }, text);
    await page.dispatchEvent('main', 'drop', { dataTransfer: transfer });
    await waitForFact(page, 'Load', /1 array, 5 orbitals/);
  });
});
