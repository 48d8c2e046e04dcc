import type { ElementName } from './arrays';

/** Magic, version 1.0, and the length of the header must fill a multiple of this. */
const ALIGNMENT = 64;
const PREFIX = 10;

/** What stands before the numbers in an `.npy` file, format version 1.0 (NumPy Enhancement Proposal 1). */
export function npyHeader(type: ElementName, shape: readonly number[]): Uint8Array {
  const extents = shape.length === 1 ? `(${shape[0]},)` : `(${shape.join(', ')})`;
  const dictionary = `{'descr': '${type}', 'fortran_order': False, 'shape': ${extents}, }`;
  const total = Math.ceil((PREFIX + dictionary.length + 1) / ALIGNMENT) * ALIGNMENT;
  const header = `${dictionary.padEnd(total - PREFIX - 1)}\n`;
  const bytes = new Uint8Array(total);
  bytes.set([0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59, 1, 0, header.length & 255, header.length >> 8]);
  for (let i = 0; i < header.length; i++) bytes[PREFIX + i] = header.charCodeAt(i);
  return bytes;
}
