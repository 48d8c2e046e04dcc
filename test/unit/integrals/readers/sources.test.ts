import { mkdirSync, mkdtempSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { folderFiles, namedFiles } from '../../../../app/cli/files';
import { fileSetFromMemory, memorySource, sniffFormat } from '../../../../core/integrals';
import { InputError } from '../../../../core/job';
import { blobFileSet } from '../../../../renderer/engine/files';
import { fixture } from './shared-data';

let root = '';
beforeAll(() => {
  root = mkdtempSync(join(tmpdir(), 'sources-'));
  const set = join(root, 'set');
  mkdirSync(join(set, 'sub'), { recursive: true });
  writeFileSync(join(set, 'a.txt'), 'hello');
  writeFileSync(join(set, 'sub', 'b.txt'), 'world');
  writeFileSync(join(set, '.hidden'), 'x');
  writeFileSync(join(root, 'outside.txt'), 'secret');
  symlinkSync(join(root, 'outside.txt'), join(set, 'out.txt'));
  symlinkSync(join(set, 'a.txt'), join(set, 'in.txt'));
  symlinkSync(join(set, 'nowhere'), join(set, 'dangling'));
});
afterAll(() => rmSync(root, { recursive: true }));

const text = (bytes: Uint8Array) => new TextDecoder().decode(bytes);

describe('file sets', () => {
  it('lists a folder with its subfolders, without hidden files and links that lead out', async () => {
    const files = await folderFiles(join(root, 'set'));
    expect(files.name).toBe('set');
    expect(files.list().map(({ path }) => path)).toEqual(['a.txt', 'in.txt', 'sub/b.txt']);
    expect(files.open('out.txt')).toBeUndefined();
    expect(files.open('../outside.txt')).toBeUndefined();
    const source = files.open('sub/b.txt');
    expect(source?.size).toBe(5);
    expect(text((await source?.read(1, 100)) as Uint8Array)).toBe('orld');
    expect((await source?.read(9, 4))?.length).toBe(0);
  });

  it('says which path is missing, is a folder, or has a name twice', async () => {
    for (const [work, part] of [
      [() => folderFiles(join(root, 'none')), 'none'],
      [() => namedFiles([join(root, 'set', 'none.txt')]), 'none.txt'],
      [() => namedFiles([join(root, 'set')]), 'no regular file'],
      [() => folderFiles(join(root, 'outside.txt')), 'no folder'],
    ] as const) {
      const error = await work().catch((e: unknown) => e);
      expect(error).toBeInstanceOf(InputError);
      expect((error as InputError).message).toContain(part);
    }
    writeFileSync(join(root, 'a.txt'), 'other');
    await expect(namedFiles([join(root, 'a.txt'), join(root, 'set', 'a.txt')])).rejects.toThrow(
      'second file',
    );
  });

  it('gives the same bytes from a folder, from memory and from blobs', async () => {
    const content = new Uint8Array(300).map((_, i) => i);
    writeFileSync(join(root, 'set', 'bytes.bin'), content);
    const sets = [
      await folderFiles(join(root, 'set')),
      fileSetFromMemory('set', new Map([['bytes.bin', content]])),
      blobFileSet('set', [{ path: 'bytes.bin', blob: new Blob([content]) }]),
    ];
    for (const files of sets) {
      const source = files.open('bytes.bin');
      expect(files.name).toBe('set');
      expect(source?.size).toBe(300);
      expect(await source?.read(250, 100)).toEqual(content.slice(250));
      expect(await source?.read(3, 4)).toEqual(content.slice(3, 7));
    }
  });
});

describe('sniffFormat', () => {
  it.each([
    ['&FCI NORB=2', 'fcidump'],
    ['\n  $fci norb=2', 'fcidump'],
    ['\ufeff&FCI', 'fcidump'],
    ['&FCIX', 'text'],
    [' {"schema": 1}', 'json'],
    ['[1]', 'json'],
    ['1 1 0.5\n', 'text'],
    ['# größe\n', 'text'],
    ['', 'unknown'],
    ['\u0000\u0001', 'unknown'],
  ])('calls %j %s', async (content, format) => {
    expect(await sniffFormat(memorySource('x', content))).toBe(format);
  });

  it.each([
    ['f8.npy', 'npy'],
    ['stored.npz', 'npz'],
    ['arrays.h5', 'hdf5'],
  ])('calls %s %s', async (name, format) => {
    expect(await sniffFormat(await fixture(name))).toBe(format);
  });

  it('finds HDF5 behind a user block', async () => {
    const source = await fixture('arrays.h5');
    const bytes = new Uint8Array(1024 + source.size);
    bytes.set(await source.read(0, source.size), 1024);
    expect(await sniffFormat(memorySource('x', bytes))).toBe('hdf5');
  });
});
