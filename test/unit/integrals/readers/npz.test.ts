import { deflateSync, zipSync } from 'fflate';
import { describe, expect, it } from 'vitest';
import { listNpz, memorySource, readNpz } from '../../../../core/integrals';
import { InputError, inlineContext } from '../../../../core/job';
import { expected, fixture } from './shared-data';

const context = inlineContext();
const bytesOf = async (name: string): Promise<Uint8Array> => {
  const source = await fixture(name);
  return source.read(0, source.size);
};
const problem = async (bytes: Uint8Array, member: string | undefined): Promise<InputError> => {
  const error = await readNpz(memorySource('a.npz', bytes), member, context).catch((e: unknown) => e);
  expect(error).toBeInstanceOf(InputError);
  return error as InputError;
};

describe('readNpz', () => {
  it('reads deflated members as NumPy wrote them', async () => {
    const source = await fixture('deflated.npz');
    expect(await listNpz(source, context)).toEqual(['long', 'long_f4', 'fortran', 'small']);
    for (const name of ['long', 'long_f4.npy']) {
      const raw = await readNpz(source, name, context);
      expect(raw.shape).toEqual([70000]);
      expect([...raw.data]).toEqual(expected(70000, 'f'));
    }
    const complex = await readNpz(source, 'fortran', context);
    expect(complex.origin).toBe('deflated.npz:fortran');
    expect(complex.shape).toEqual([3, 5]);
    expect([...complex.data]).toEqual(expected(15, 'c'));
  });

  // zip64.npz: the same archive with its sizes in the 64-bit fields that Python's zipfile uses beyond 4 GiB.
  it.each(['stored.npz', 'zip64.npz'])('reads %s', async (name) => {
    const source = await fixture(name);
    expect(await listNpz(source, context)).toEqual(['small', 'other']);
    expect([...(await readNpz(source, 'small', context)).data]).toEqual(expected(4, 'f'));
    expect([...(await readNpz(source, 'other', context)).data]).toEqual(expected(15, 'c'));
  });

  it('takes the only array unasked, and names the choice where there are several', async () => {
    const npy = await bytesOf('f8.npy');
    const one = memorySource('one.npz', zipSync({ 'g.npy': npy }));
    expect([...(await readNpz(one, undefined, context)).data]).toEqual(expected(24, 'f'));
    const many = await problem(await bytesOf('stored.npz'), undefined);
    expect(many.code).toBe('no-such-array');
    expect(many.message).toContain('small, other');
    expect((await problem(await bytesOf('stored.npz'), 'smal')).message).toContain('a.npz:smal');
  });

  it('refuses an archive cut at any place', async () => {
    const bytes = await bytesOf('stored.npz');
    for (let length = 0; length < bytes.length; length += 7) {
      const error = await problem(bytes.slice(0, length), 'small');
      expect(['bad-zip', 'empty-file', 'truncated']).toContain(error.code);
    }
  });

  it('notices a changed byte in the data of a member, stored or deflated', async () => {
    for (const name of ['stored.npz', 'deflated.npz']) {
      const bytes = (await bytesOf(name)).slice();
      // Inside the first member, behind its header and the header of its array.
      bytes[name === 'stored.npz' ? 200 : 1500] ^= 0x41;
      const error = await problem(bytes, name === 'stored.npz' ? 'small' : 'long');
      expect(['bad-zip', 'bad-header', 'not-npy']).toContain(error.code);
    }
  });

  it('refuses what unfolds beyond reason, told or untold', async () => {
    const header = "{'descr': '<f8', 'fortran_order': False, 'shape': (10000000,), }\n";
    const npy = new Uint8Array(10 + header.length + 8e7);
    npy.set([0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59, 1, 0, header.length, 0]);
    npy.set(new TextEncoder().encode(header), 10);
    const bomb = zipSync({ 'zeros.npy': npy }, { level: 9 });
    expect(bomb.length).toBeLessThan(2e5);
    const told = await problem(bomb, 'zeros');
    expect(told.code).toBe('implausible-size');
    expect(told.message).toContain('a.npz:zeros');

    // The directory lies: it promises the bytes of a small array.
    const lie = npy.slice(0, 10 + header.length + 80);
    const small = new TextEncoder().encode(header.replace('10000000', '10      '));
    lie.set(small, 10);
    const honest = zipSync({ 'zeros.npy': lie }, { level: 0 });
    const packed = deflateSync(npy);
    const archive = withData(honest, packed, lie.length);
    const error = await problem(archive, 'zeros');
    expect(error.code).toBe('bad-zip');
    expect(error.message).toContain('more than');
  });

  it('refuses other compression methods and encryption', async () => {
    for (const [offset, value] of [
      [10, 12],
      [8, 1],
    ]) {
      const bytes = zipSync({ 'g.npy': await bytesOf('f8.npy') });
      const directory = lastIndexOf(bytes, [0x50, 0x4b, 1, 2]);
      bytes[directory + offset] = value;
      expect((await problem(bytes, 'g')).code).toBe('bad-zip');
    }
  });
});

function lastIndexOf(bytes: Uint8Array, mark: readonly number[]): number {
  for (let at = bytes.length - mark.length; at >= 0; at--) {
    if (mark.every((byte, i) => bytes[at + i] === byte)) return at;
  }
  throw new Error('no mark');
}

/** The archive of one stored member with other, deflated data, whose unpacked size stays as it was written. */
function withData(archive: Uint8Array, packed: Uint8Array, unpacked: number): Uint8Array {
  const directory = lastIndexOf(archive, [0x50, 0x4b, 1, 2]);
  const dataStart = directory - unpacked;
  const out = new Uint8Array(archive.length - unpacked + packed.length);
  out.set(archive.subarray(0, dataStart));
  out.set(packed, dataStart);
  out.set(archive.subarray(directory), dataStart + packed.length);
  const view = new DataView(out.buffer);
  const at = dataStart + packed.length;
  view.setUint16(at + 10, 8, true);
  view.setUint32(at + 20, packed.length, true);
  view.setUint32(lastIndexOf(out, [0x50, 0x4b, 5, 6]) + 16, at, true);
  return out;
}
