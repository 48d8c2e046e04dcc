import { chmodSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { delimiter, join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { COMMANDS, findBrowser, sandboxFlags } from '../../../build/browser.mjs';

describe('finding a browser', () => {
  let folder: string;
  beforeEach(() => {
    folder = mkdtempSync(join(tmpdir(), 'browser-test-'));
  });
  afterEach(() => rmSync(folder, { recursive: true }));

  function program(name: string, place = folder): string {
    mkdirSync(place, { recursive: true });
    const path = join(place, name);
    writeFileSync(path, '');
    chmodSync(path, 0o755);
    return path;
  }

  it('takes the first of the list that is on the path', () => {
    const chrome = program('google-chrome');
    expect(findBrowser({ env: { PATH: folder }, platform: 'linux' })).toBe(chrome);
    const chromium = program('chromium');
    expect(findBrowser({ env: { PATH: folder }, platform: 'linux' })).toBe(chromium);
    expect(COMMANDS.indexOf('chromium')).toBeLessThan(COMMANDS.indexOf('google-chrome'));
  });

  it('looks through all folders of the path', () => {
    const later = program('brave-browser', join(folder, 'later'));
    const path = [join(folder, 'missing'), join(folder, 'later')].join(delimiter);
    expect(findBrowser({ env: { PATH: path }, platform: 'linux' })).toBe(later);
  });

  it('prefers SPINWRIGHT_BROWSER, as a path or as a command, and never replaces it', () => {
    program('chromium');
    const own = program('my-browser', join(folder, 'own'));
    expect(findBrowser({ env: { PATH: folder, SPINWRIGHT_BROWSER: own }, platform: 'linux' })).toBe(own);
    const path = [folder, join(folder, 'own')].join(delimiter);
    expect(findBrowser({ env: { PATH: path, SPINWRIGHT_BROWSER: 'my-browser' }, platform: 'linux' })).toBe(
      own,
    );
    const missing = join(folder, 'gone');
    expect(findBrowser({ env: { PATH: folder, SPINWRIGHT_BROWSER: missing }, platform: 'linux' })).toBeNull();
  });

  it('passes over a file that cannot be run and over a folder of that name', () => {
    writeFileSync(join(folder, 'chromium'), '');
    chmodSync(join(folder, 'chromium'), 0o644);
    mkdirSync(join(folder, 'chromium-browser'));
    const edge = program('microsoft-edge');
    expect(findBrowser({ env: { PATH: folder }, platform: 'linux' })).toBe(edge);
  });

  it('knows the usual place on Windows', () => {
    const edge = program('msedge.exe', join(folder, 'Microsoft', 'Edge', 'Application'));
    expect(findBrowser({ env: { PATH: '', PROGRAMFILES: folder }, platform: 'win32' })).toBe(edge);
  });

  it('gives up the sandbox for root alone', () => {
    expect(sandboxFlags(0)).toEqual(['--no-sandbox']);
    expect(sandboxFlags(1000)).toEqual([]);
  });
});
