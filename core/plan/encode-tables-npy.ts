import type { TableArray } from './encode-tables-layout';

const TYPES = new Map<string, string>([
  ['Float64Array', '<f8'],
  ['Uint32Array', '<u4'],
  ['Uint8Array', '|u1'],
  ['Int8Array', '|i1'],
]);

/** Magic, version 1.0, and the length of the header must fill a multiple of this. */
const ALIGNMENT = 64;
const PREFIX = 10;

/** An array as an `.npy` file, format version 1.0 (NumPy Enhancement Proposal 1). Little-endian machines only. */
export function npyBytes({ data, shape }: Pick<TableArray, 'data' | 'shape'>): Uint8Array {
  const extents = shape.length === 1 ? `(${shape[0]},)` : `(${shape.join(', ')})`;
  const descr = TYPES.get(data.constructor.name)!;
  const dictionary = `{'descr': '${descr}', 'fortran_order': False, 'shape': ${extents}, }`;
  const total = Math.ceil((PREFIX + dictionary.length + 1) / ALIGNMENT) * ALIGNMENT;
  const header = `${dictionary.padEnd(total - PREFIX - 1)}\n`;
  const bytes = new Uint8Array(total + data.byteLength);
  bytes.set([0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59, 1, 0, header.length & 255, header.length >> 8]);
  for (let i = 0; i < header.length; i++) bytes[PREFIX + i] = header.charCodeAt(i);
  bytes.set(new Uint8Array(data.buffer, data.byteOffset, data.byteLength), total);
  return bytes;
}
