import { mkdirSync, mkdtempSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { basename, join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GrantError, Grants, NOTHING } from '../../../app/web/grants';

let folder: string;
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'grants-'));
  for (const name of ['FCIDUMP', 'a.npy', 'one.recipe.json', 'two.recipe.json', '.hidden'])
    writeFileSync(join(folder, name), name);
  mkdirSync(join(folder, 'deep'));
  writeFileSync(join(folder, 'deep', 'b.npy'), 'b');
  symlinkSync('/etc/hostname', join(folder, 'link.npy'));
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

describe('grants', () => {
  it('gives nothing where nothing was named', async () => {
    expect(await new Grants().grant([])).toEqual(NOTHING);
  });

  it('shows a folder as a data set: paths inside it, opaque addresses, no hidden files, no links', async () => {
    const grants = new Grants();
    const listing = await grants.grant([folder]);
    expect(listing).toMatchObject({ name: basename(folder), chosenOneByOne: false });
    expect(listing.files.map((f) => f.path)).toEqual([
      'FCIDUMP',
      'a.npy',
      'deep/b.npy',
      'one.recipe.json',
      'two.recipe.json',
    ]);
    for (const { href } of listing.files) expect(href).toMatch(/^given\/[0-9a-f]{32}$/);
    expect(JSON.stringify(listing)).not.toContain(folder);
    expect(grants.pathOf(listing.files[2]!.href.slice('given/'.length))).toBe(join(folder, 'deep', 'b.npy'));
  });

  it('takes a recipe for the folder it lies in, without the other recipes', async () => {
    const listing = await new Grants().grant([join(folder, 'one.recipe.json')]);
    expect(listing.chosenOneByOne).toBe(false);
    expect(listing.files.map((f) => f.path)).toEqual(['FCIDUMP', 'a.npy', 'deep/b.npy', 'one.recipe.json']);
  });

  it('grants named files one by one', async () => {
    const listing = await new Grants().grant([join(folder, 'FCIDUMP'), join(folder, 'a.npy')]);
    expect(listing.chosenOneByOne).toBe(true);
    expect(listing.files.map((f) => f.path)).toEqual(['FCIDUMP', 'a.npy']);
  });

  it('knows no other file, whatever the address', async () => {
    const grants = new Grants();
    await grants.grant([join(folder, 'FCIDUMP')]);
    for (const id of ['', '../FCIDUMP', '0'.repeat(32), 'FCIDUMP', '__proto__'])
      expect(grants.pathOf(id)).toBeUndefined();
  });

  it('refuses what is not there and a folder beside files, in one line', async () => {
    const missing = await new Grants().grant([join(folder, 'nothing')]).catch((e: unknown) => e);
    expect(missing).toBeInstanceOf(GrantError);
    expect((missing as Error).message).toMatch(
      /^[^\n]*nothing: no such file or folder; expected .*\. Correct the path\.$/,
    );
    await expect(new Grants().grant([folder, join(folder, 'FCIDUMP')])).rejects.toThrow(
      'a folder beside other files',
    );
  });
});
