import { mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { MenuItemConstructorOptions } from 'electron';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { guardContents, guardSession, windowOptions } from '../../../app/desktop/guards';
import { menuTemplate } from '../../../app/desktop/menu';
import { writeWhole } from '../../../app/desktop/save';
import { makeSchemeHandler, ORIGIN } from '../../../app/desktop/scheme';
import { Grants, NOTHING } from '../../../app/web/grants';
import { CONTENT_SECURITY_POLICY } from '../../../app/web/policy';
import { COMMANDS } from '../../../renderer/shell';

let folder: string;
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'desktop-'));
  mkdirSync(join(folder, 'renderer'));
  writeFileSync(join(folder, 'renderer', 'index.html'), 'page');
  writeFileSync(join(folder, 'secret'), 'secret');
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

describe('desktop window', () => {
  it('has a context of its own, the sandbox, and no Node in the page', () => {
    const { webPreferences } = windowOptions('/app/preload.cjs');
    expect(webPreferences).toMatchObject({
      contextIsolation: true,
      sandbox: true,
      nodeIntegration: false,
      nodeIntegrationInWorker: false,
      webSecurity: true,
      webviewTag: false,
      navigateOnDragDrop: false,
    });
  });

  it('denies new windows, navigation and embedded pages', () => {
    const prevented: string[] = [];
    let opening: unknown;
    guardContents({
      setWindowOpenHandler: (handler) => {
        opening = handler();
      },
      on: (event, listener) => listener({ preventDefault: () => prevented.push(event) }),
    });
    expect(opening).toEqual({ action: 'deny' });
    expect(prevented.sort()).toEqual(['will-attach-webview', 'will-navigate', 'will-redirect']);
  });

  it('lets the page ask the system for nothing but copying', () => {
    const granted: Record<string, boolean> = {};
    guardSession({
      setPermissionRequestHandler: (handler) => {
        for (const permission of [
          'clipboard-sanitized-write',
          'media',
          'geolocation',
          'openExternal',
          'clipboard-read',
        ])
          handler(null, permission, (ok) => {
            granted[permission] = ok;
          });
      },
      setPermissionCheckHandler: (check) => {
        granted.check = check(null, 'notifications');
      },
    });
    expect(granted).toEqual({
      'clipboard-sanitized-write': true,
      media: false,
      geolocation: false,
      openExternal: false,
      'clipboard-read': false,
      check: false,
    });
  });

  it('serves its own scheme from the built window only, with the policy', async () => {
    const handle = makeSchemeHandler({
      root: join(folder, 'renderer'),
      grants: new Grants(),
      given: NOTHING,
    });
    const get = (url: string, method = 'GET') => handle({ url, method });
    const page = await get(ORIGIN);
    expect(await page.text()).toBe('page');
    expect(page.headers.get('content-security-policy')).toBe(CONTENT_SECURITY_POLICY);
    expect((await get(`${ORIGIN}../secret`)).status).toBe(403);
    expect((await get(`${ORIGIN}..%2fsecret`)).status).toBe(403);
    expect((await get(ORIGIN, 'POST')).status).toBe(405);
    expect((await get('spinwright://other/index.html')).status).toBe(405);
    expect(await (await get(`${ORIGIN}given/listing.json`)).json()).toEqual(NOTHING);
  });

  it('sends from its menu only commands that the page knows', () => {
    const sent: string[] = [];
    const click = (items: readonly MenuItemConstructorOptions[]) => {
      for (const item of items) {
        (item.click as (() => void) | undefined)?.();
        if (Array.isArray(item.submenu)) click(item.submenu);
      }
    };
    click(menuTemplate('linux', (command) => sent.push(command)));
    expect(new Set(sent)).toEqual(new Set(COMMANDS));
    expect(menuTemplate('darwin', () => {})[0]).toEqual({ role: 'appMenu' });
  });

  it('writes a file whole and leaves nothing half-written', async () => {
    const path = join(folder, 'table.csv');
    await writeWhole(path, 'one');
    await writeWhole(path, 'two');
    expect(readFileSync(path, 'utf8')).toBe('two');
    await expect(writeWhole(join(folder, 'nowhere', 'x.csv'), 'x')).rejects.toThrow();
    expect(readdirSync(folder).filter((name) => name.includes('.tmp-'))).toEqual([]);
  });
});
