import { fileURLToPath } from 'node:url';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { setFolder } from '../fixtures/sets/read-set';
import { goTo, launchBrowser, type OpenWindow, openWindow, waitForFact } from './browser';

// What no figure may do at any of the sizes the window is made for. With SPINWRIGHT_PICTURES=1 the pictures beside
// this file are taken anew; NOTE.md there says what was seen in them.
const SIZES = [
  { width: 1280, height: 800 },
  { width: 1280, height: 720 },
  { width: 1024, height: 680 },
  { width: 1920, height: 1080 },
];
const KEPT = ['1280x800', '1280x720'];
const STOPS = ['Load', 'Terms', 'Target', 'Variants', 'Ledger', 'Proof'];
const PICTURES = fileURLToPath(new URL('./pictures/', import.meta.url));

let browser: Browser;
let window: OpenWindow;
beforeAll(async () => {
  browser = await launchBrowser();
  window = await openWindow(browser, { demo: true });
  await waitForFact(window.page, 'Variants', /8 of 8 done/);
});
afterAll(async () => {
  await window?.close();
  await browser?.close();
});

/** Texts that are cut off: wider than their box although the box hides what sticks out. */
function cutTexts(page: Page): Promise<string[]> {
  return page.evaluate(() =>
    [...document.querySelectorAll<HTMLElement>('h1, h2, h3, p, th, td, button, label, dt, dd, .fact')]
      .filter((e) => e.offsetParent !== null && getComputedStyle(e).overflow !== 'visible')
      .filter((e) => e.scrollWidth > e.clientWidth + 1 && e.closest('#reckoning, .spoken') === null)
      .map((e) => e.textContent?.trim().slice(0, 60) ?? ''),
  );
}

/** Contrast of every text against the nearest painted background, by WCAG 2; the least with its text. */
function leastContrast(page: Page): Promise<{ ratio: number; text: string }> {
  return page.evaluate(() => {
    const luminance = (rgb: number[]) => {
      const [r, g, b] = rgb.map((v) =>
        v / 255 <= 0.03928 ? v / 255 / 12.92 : ((v / 255 + 0.055) / 1.055) ** 2.4,
      );
      return 0.2126 * r! + 0.7152 * g! + 0.0722 * b!;
    };
    const parse = (colour: string) => colour.match(/[\d.]+/g)!.map(Number);
    const background = (e: Element | null): number[] => {
      for (let at = e; at; at = at.parentElement) {
        const colour = parse(getComputedStyle(at).backgroundColor);
        if (colour[3] !== 0) return colour.slice(0, 3);
      }
      return [255, 255, 255];
    };
    let least = { ratio: 99, text: '' };
    for (const e of document.querySelectorAll<HTMLElement>('body *')) {
      const own = [...e.childNodes].some(
        (n) => n.nodeType === Node.TEXT_NODE && n.textContent!.trim() !== '',
      );
      if (!own || e.offsetParent === null || e.closest('.spoken')) continue;
      const pair = [luminance(parse(getComputedStyle(e).color).slice(0, 3)), luminance(background(e))];
      const ratio = (Math.max(...pair) + 0.05) / (Math.min(...pair) + 0.05);
      if (ratio < least.ratio) least = { ratio, text: e.textContent!.trim().slice(0, 40) };
    }
    return least;
  });
}

const cases = SIZES.flatMap((size) =>
  (['light', 'dark'] as const).map((colorScheme) => ({ ...size, colorScheme })),
);

it.each(cases)('fits at $width×$height, $colorScheme', async ({ width, height, colorScheme }) => {
  const { page, complaints } = window;
  await page.setViewportSize({ width, height });
  await page.emulateMedia({ colorScheme });
  for (const stop of STOPS) {
    await goTo(page, stop);
    await page.mouse.move(0, 0);
    await page.waitForTimeout(250);
    const overflow = await page.evaluate(() => ({
      wide: document.documentElement.scrollWidth - innerWidth,
      high: document.documentElement.scrollHeight - innerHeight,
    }));
    expect(overflow, stop).toEqual({ wide: 0, high: 0 });
    expect(await cutTexts(page), stop).toEqual([]);
    const contrast = await leastContrast(page);
    // WCAG 2.2, success criterion 1.4.3: 4.5 to 1 for text.
    expect(contrast.ratio, `${stop}: "${contrast.text}"`).toBeGreaterThanOrEqual(4.5);
    const name = `${width}x${height}`;
    if (process.env.SPINWRIGHT_PICTURES && KEPT.includes(name)) {
      const all = stop === 'Ledger' || name === '1280x800';
      if (all) await page.screenshot({ path: `${PICTURES}${stop.toLowerCase()}-${name}-${colorScheme}.png` });
    }
  }
  expect(complaints).toEqual([]);
});

it('stands every bar exactly under its column', async () => {
  const { page } = window;
  await page.setViewportSize({ width: 1280, height: 800 });
  await page.emulateMedia({ colorScheme: 'light' });
  await goTo(page, 'Ledger');
  await page.waitForTimeout(400);
  const centres = await page.evaluate(() => {
    const middle = (e: Element) => (e.getBoundingClientRect().left + e.getBoundingClientRect().right) / 2;
    return [...document.querySelectorAll('td[id^="cell-step-"]')].map(middle);
  });
  const chart = page.getByRole('region', { name: 'Toffoli a step' }).locator('canvas');
  const box = (await chart.boundingBox())!;
  // The colour just above the base line at each centre belongs to a bar, and 40 px beside it to none.
  const painted = await chart.evaluate(
    (canvas, { xs, left }) => {
      const element = canvas as HTMLCanvasElement;
      const scale = element.width / element.clientWidth;
      const ctx = element.getContext('2d')!;
      // Chart.js leaves half a line for the axis' 0 below the base line; 18 px from the edge is inside the lowest bar.
      const y = Math.round((element.clientHeight - 18) * scale);
      const alpha = (x: number) => ctx.getImageData(Math.round((x - left) * scale), y, 1, 1).data;
      return xs.map((x) => ({ at: [...alpha(x)], inside: [...alpha(x - 24)], outside: [...alpha(x - 29)] }));
    },
    { xs: centres, left: box.x },
  );
  expect(painted).toHaveLength(8);
  for (const { at, inside, outside } of painted) {
    expect(at[3]).toBe(255);
    expect(inside).toEqual(at);
    expect(outside).not.toEqual(at);
  }
});

it('shows the smallest set too', async () => {
  const small = await openWindow(browser, { named: [setFolder('c_631g_2p')] });
  await waitForFact(small.page, 'Variants', /\d of 8 done|could not/);
  await waitForFact(small.page, 'Ledger', /leads|none/);
  expect(await cutTexts(small.page)).toEqual([]);
  expect(small.complaints).toEqual([]);
  await small.close();
});
