import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { memorySource, readNpy } from '../../../../core/integrals';
import { InputError, inlineContext } from '../../../../core/job';
import { expected, fixture } from './shared-data';

const context = inlineContext();
const listing = JSON.parse(
  readFileSync(new URL('../../../fixtures/formats/npy.json', import.meta.url), 'utf8'),
) as { file: string; shape: number[]; kind: 'f' | 'c' | 'i' | 'u' }[];

const bytesOf = async (name: string): Promise<Uint8Array> => {
  const source = await fixture(name);
  return source.read(0, source.size);
};
const problem = async (path: string, bytes: Uint8Array): Promise<InputError> => {
  const error = await readNpy(memorySource(path, bytes), context).catch((e: unknown) => e);
  expect(error).toBeInstanceOf(InputError);
  return error as InputError;
};

describe('readNpy', () => {
  it.each(listing)('reads $file as NumPy wrote it', async ({ file, shape, kind }) => {
    const raw = await readNpy(await fixture(file), context);
    const count = shape.reduce((product, extent) => product * extent, 1);
    expect(raw.origin).toBe(file);
    expect(raw.shape).toEqual(shape);
    expect(raw.complex).toBe(kind === 'c');
    // Each value is exact in every element type of the fixtures.
    expect([...raw.data]).toEqual(expected(count, kind));
  });

  it('reads the same from a source that gives its bytes in memory, and reports progress by bytes', async () => {
    const bytes = await bytesOf('c16_fortran.npy');
    const told: [string, number, number | null][] = [];
    const raw = await readNpy(memorySource('a.npy', bytes), {
      ...context,
      report: (stage, done, total) => told.push([stage, done, total]),
    });
    expect([...raw.data]).toEqual(expected(12, 'c'));
    for (const [stage, done, total] of told) {
      expect(stage).toBe('reading a.npy');
      expect(done).toBeLessThanOrEqual(total as number);
    }
  });

  it.each([
    ['object.npy', 'object-array', 'pickled'],
    ['half.npy', 'bad-element-type', '<f2'],
    ['structured.npy', 'bad-element-type', 'structure'],
    ['text.npy', 'bad-element-type', '<U2'],
    ['nan.npy', 'not-finite', 'nan.npy[1, 0]'],
    ['wide_integers.npy', 'integer-too-large', 'element 1'],
  ])('refuses %s', async (file, code, part) => {
    const error = await problem(file, await bytesOf(file));
    expect(error.code).toBe(code);
    expect(error.message).toContain(part);
  });

  it('refuses a file cut at any byte, and one with bytes too many', async () => {
    const bytes = await bytesOf('f8.npy');
    for (let length = 0; length < bytes.length; length++) {
      const error = await problem('cut.npy', bytes.slice(0, length));
      expect(['truncated', 'empty-file']).toContain(error.code);
    }
    const longer = new Uint8Array(bytes.length + 3);
    longer.set(bytes);
    expect((await problem('long.npy', longer)).code).toBe('trailing-bytes');
  });

  it('refuses shapes that the file cannot hold before it allocates', async () => {
    for (const shape of ['(99999999999,)', '(400, 400, 400, 400)', '(3, 4, 5)']) {
      const header = `{'descr': '<f8', 'fortran_order': False, 'shape': ${shape}, }\n`;
      const error = await problem('huge.npy', npy(header, 64));
      expect(['too-large', 'truncated']).toContain(error.code);
    }
  });

  it.each([
    "{'descr': '<f8', 'fortran_order': False}",
    "{'descr': '<f8', 'fortran_order': 0, 'shape': (2,)}",
    "{'descr': '<f8', 'fortran_order': False, 'shape': (2.5,)}",
    "{'descr': '<f8', 'fortran_order': False, 'shape': (-2,)}",
    "{'descr': __import__('os'), 'fortran_order': False, 'shape': (2,)}",
    "{'descr': '<f8', 'fortran_order': False, 'shape': (2,)} + x",
    '((((((((((((((((((((((((1))))))))))))))))))))))))',
    '',
  ])('refuses the header %s', async (header) => {
    expect((await problem('bad.npy', npy(header, 16))).code).toBe('bad-header');
  });

  it('refuses other magic bytes and versions', async () => {
    const bytes = await bytesOf('f8.npy');
    expect((await problem('a.npy', new TextEncoder().encode('hello, hello, hello'))).code).toBe('not-npy');
    for (const version of [0, 4, 255]) {
      const other = bytes.slice();
      other[6] = version;
      expect((await problem('a.npy', other)).code).toBe('bad-header');
    }
  });
});

/** An .npy file of format 1.0 with `count` data bytes. */
function npy(header: string, count: number): Uint8Array {
  const bytes = new Uint8Array(10 + header.length + count);
  bytes.set([0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59, 1, 0, header.length & 255, header.length >> 8]);
  bytes.set(new TextEncoder().encode(header), 10);
  return bytes;
}
