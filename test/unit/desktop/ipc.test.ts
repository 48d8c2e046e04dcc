import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { IpcMainInvokeEvent, OpenDialogOptions } from 'electron';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { CHANNELS, type IpcLike, registerIpc } from '../../../app/desktop/ipc';
import { Recent } from '../../../app/desktop/recent';
import { isOwnPage, ORIGIN } from '../../../app/desktop/scheme';
import { Grants, type Listing } from '../../../app/web/grants';

let folder: string;
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'ipc-'));
  writeFileSync(join(folder, 'FCIDUMP'), 'x');
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** Arguments and results cross by structured clone, and a second handler is an error, as in Electron. */
class FakeIpc implements IpcLike {
  readonly #handlers = new Map<string, Parameters<IpcLike['handle']>[1]>();

  handle(channel: string, listener: Parameters<IpcLike['handle']>[1]): void {
    if (this.#handlers.has(channel)) throw new Error(`a second handler for ${channel}`);
    this.#handlers.set(channel, listener);
  }

  async invoke(channel: string, args: unknown[] = [], url: string | null = ORIGIN): Promise<unknown> {
    const event = { senderFrame: url === null ? null : { url } } as unknown as IpcMainInvokeEvent;
    return structuredClone(await this.#handlers.get(channel)!(event, ...structuredClone(args)));
  }
}

function make({ picked = [join(folder, 'FCIDUMP')], target = '/out/table.csv' } = {}) {
  const ipc = new FakeIpc();
  const written: [string, string][] = [];
  const asked: OpenDialogOptions[] = [];
  const grants = new Grants();
  let stored = '';
  registerIpc({
    ipc,
    dialog: {
      showOpenDialog: async (options) => {
        asked.push(options);
        return { canceled: picked.length === 0, filePaths: picked };
      },
      showSaveDialog: async () => ({ canceled: target === '', filePath: target }),
    },
    grants,
    recent: new Recent({
      read: async () => stored,
      write: async (text) => {
        stored = text;
      },
    }),
    writeFile: async (path, text) => void written.push([path, text]),
    isTrusted: isOwnPage,
  });
  return { ipc, written, asked, grants };
}

describe('bridge', () => {
  it('opens what the dialog gave, by opaque address and without the path', async () => {
    const { ipc, grants } = make();
    const listing = (await ipc.invoke(CHANNELS.open, ['files'])) as Listing;
    expect(listing.files.map((f) => f.path)).toEqual(['FCIDUMP']);
    expect(JSON.stringify(listing)).not.toContain(folder);
    expect(grants.pathOf(listing.files[0]!.href.slice(6))).toBe(join(folder, 'FCIDUMP'));
  });

  it('asks for a folder where a folder is wanted, and gives null where nothing was chosen', async () => {
    const { ipc, asked } = make({ picked: [] });
    expect(await ipc.invoke(CHANNELS.open, ['folder'])).toBeNull();
    expect(asked[0]!.properties).toEqual(['openDirectory']);
  });

  it('saves text where the dialog said, and nothing where it was closed', async () => {
    const { ipc, written } = make();
    expect(await ipc.invoke(CHANNELS.save, ['table.csv', 'a,b'])).toBe(true);
    expect(written).toEqual([['/out/table.csv', 'a,b']]);
    const closed = make({ target: '' });
    expect(await closed.ipc.invoke(CHANNELS.save, ['table.csv', 'a,b'])).toBe(false);
    expect(closed.written).toEqual([]);
  });

  it('lists files opened before by id and name, and opens them again by id', async () => {
    const { ipc } = make();
    await ipc.invoke(CHANNELS.open, ['files']);
    const recent = (await ipc.invoke(CHANNELS.recent)) as { id: string; name: string }[];
    expect(recent).toEqual([{ id: expect.stringMatching(/^[0-9a-f]{16}$/), name: 'FCIDUMP' }]);
    const again = (await ipc.invoke(CHANNELS.openRecent, [recent[0]!.id])) as Listing;
    expect(again.files.map((f) => f.path)).toEqual(['FCIDUMP']);
    expect(await ipc.invoke(CHANNELS.openRecent, ['f'.repeat(16)])).toBeNull();
  });

  it.each([
    ['https://evil.example/'],
    ['spinwright://other/'],
    ['spinwright://window.evil.example/'],
    ['file:///index.html'],
    ['about:blank'],
    [null],
  ])('refuses every call from %s', async (url) => {
    const { ipc, written } = make();
    for (const channel of [CHANNELS.open, CHANNELS.save, CHANNELS.recent, CHANNELS.openRecent])
      await expect(ipc.invoke(channel, ['files', 'x'], url)).rejects.toThrow('refused a call');
    expect(written).toEqual([]);
  });

  it.each([
    [CHANNELS.open, []],
    [CHANNELS.open, ['/etc']],
    [CHANNELS.open, [{ toString: 'files' }]],
    [CHANNELS.save, ['../up.csv', 'x']],
    [CHANNELS.save, ['/etc/passwd', 'x']],
    [CHANNELS.save, ['..', 'x']],
    [CHANNELS.save, ['a\\b', 'x']],
    [CHANNELS.save, ['a'.repeat(256), 'x']],
    [CHANNELS.save, ['a.csv', 7]],
    [CHANNELS.save, ['a.csv', new Uint8Array(1)]],
    [CHANNELS.save, [3, 'x']],
    [CHANNELS.openRecent, [7]],
  ])('refuses %s with %j', async (channel, args) => {
    const { ipc, written } = make();
    await expect(ipc.invoke(channel, args)).rejects.toThrow('bad arguments');
    expect(written).toEqual([]);
  });

  it('is spelled the same in the preload script, which cannot import the names', async () => {
    const preload = await readFile(new URL('../../../app/desktop/preload.ts', import.meta.url), 'utf8');
    for (const channel of Object.values(CHANNELS)) expect(preload).toContain(`'${channel}'`);
    const used = [...preload.matchAll(/'((?:files|window):[a-z-]+)'/g)].map((m) => m[1]);
    expect(new Set(used)).toEqual(new Set(Object.values(CHANNELS)));
  });
});

describe('recent files', () => {
  it('keeps the ten last, newest first, each once, and survives a broken list', async () => {
    let stored = '{"not": "a list"}';
    const recent = new Recent({
      read: async () => stored,
      write: async (text) => {
        stored = text;
      },
    });
    expect(await recent.list()).toEqual([]);
    for (let i = 0; i < 12; i++) await recent.add({ name: `set ${i}`, paths: [`/data/${i}`] });
    await recent.add({ name: 'set 5', paths: ['/data/5'] });
    const names = (await recent.list()).map((r) => r.name);
    expect(names).toHaveLength(10);
    expect(names.slice(0, 2)).toEqual(['set 5', 'set 11']);
    stored = 'garbage';
    expect(await recent.list()).toEqual([]);
  });
});
