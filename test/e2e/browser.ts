import { type Browser, chromium, type Page } from 'playwright-core';
import { Grants, type Listing, NOTHING } from '../../app/web/grants';
import { startServer } from '../../app/web/server';
import { findBrowser, NO_BROWSER, sandboxFlags } from '../../build/browser.mjs';
import { ensureBuilt } from '../../build/setup.mjs';

const RENDERER = new URL('../../dist/renderer', import.meta.url).pathname;

/** Starts the installed browser that `npm start` would take. */
export async function launchBrowser(): Promise<Browser> {
  const executablePath = findBrowser();
  if (executablePath === null) throw new Error(NO_BROWSER);
  return chromium.launch({
    executablePath,
    args: [
      ...sandboxFlags(),
      '--disable-gpu',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
    ],
  });
}

export interface OpenWindow {
  readonly page: Page;
  /** Errors and warnings of the console, failed requests and broken policy since the start. */
  readonly complaints: readonly string[];
  close(): Promise<void>;
}

export interface WindowOptions {
  /** Files and folders as they would be named on the command line. */
  readonly named?: readonly string[];
  readonly demo?: boolean;
  readonly size?: { readonly width: number; readonly height: number };
  readonly colorScheme?: 'light' | 'dark';
}

/** The built window in a page of its own, served by the real loopback server. */
export async function openWindow(browser: Browser, options: WindowOptions = {}): Promise<OpenWindow> {
  await ensureBuilt(['renderer']);
  const grants = new Grants();
  const given: Listing = options.named
    ? await grants.grant(options.named)
    : { ...NOTHING, demo: options.demo ?? false };
  const server = await startServer({ root: RENDERER, grants, given });
  const page = await browser.newPage({
    viewport: options.size ?? { width: 1280, height: 800 },
    colorScheme: options.colorScheme ?? 'light',
    acceptDownloads: true,
  });
  const complaints: string[] = [];
  page.on('console', (message) => {
    if (['error', 'warning'].includes(message.type())) complaints.push(`console: ${message.text()}`);
  });
  page.on('pageerror', (error) => complaints.push(`page: ${error.stack ?? error.message}`));
  page.on('requestfailed', (request) => {
    // A heartbeat may be under way when the page is closed.
    if (!request.url().endsWith('/heartbeat')) complaints.push(`request: ${request.url()}`);
  });
  await page.goto(server.url);
  await page.getByRole('navigation', { name: 'Stops' }).waitFor();
  return {
    page,
    complaints,
    async close() {
      await page.close();
      server.close();
      await server.closed;
    },
  };
}

/** Waits until the rail says something about a stop. */
export async function waitForFact(page: Page, stop: string, fact: RegExp, timeout = 120_000): Promise<void> {
  await page
    .getByRole('navigation', { name: 'Stops' })
    .getByRole('button', { name: stop })
    .filter({ hasText: fact })
    .waitFor({ timeout });
}

export async function goTo(page: Page, stop: string): Promise<void> {
  await page.getByRole('navigation', { name: 'Stops' }).getByRole('button', { name: stop }).click();
}
