import type { ByteSource } from '../source';
import { latin1 } from './text-lines';

export type Format =
  | 'fcidump'
  | 'npy'
  | 'npz'
  | 'hdf5'
  | 'json'
  | 'text'
  | 'compressed'
  | 'utf-16'
  | 'unknown';

const HDF5_SIGNATURE = '\x89HDF\r\n\x1a\n';
/** gzip, bzip2, xz, Zstandard. */
const COMPRESSED = ['\x1f\x8b', 'BZh', '\xfd7zXZ\0', '\x28\xb5\x2f\xfd'];
const UTF16_MARKS = ['\xff\xfe', '\xfe\xff'];

/** What a file holds, by its content alone; names are not looked at. */
export async function sniffFormat(source: ByteSource): Promise<Format> {
  const head = await source.read(0, 4096);
  const start = latin1(head.subarray(0, 8));
  if (start.startsWith('\x93NUMPY')) return 'npy';
  if (start.startsWith('PK\x03\x04') || start.startsWith('PK\x05\x06')) return 'npz';
  if (await hasHdf5Signature(source)) return 'hdf5';
  if (COMPRESSED.some((mark) => start.startsWith(mark))) return 'compressed';
  if (UTF16_MARKS.some((mark) => start.startsWith(mark))) return 'utf-16';
  if (head.length === 0 || head.some((c) => c < 32 && c !== 9 && c !== 10 && c !== 12 && c !== 13)) {
    return 'unknown';
  }
  const text = latin1(head)
    .replace(/^\xef\xbb\xbf/, '')
    .trimStart();
  if (/^[&$]\s*fci\b/i.test(text)) return 'fcidump';
  if (/^[{[]/.test(text)) return 'json';
  return 'text';
}

/**
 * The signature stands at byte 0 or, after a user block, at 512, 1024, 2048, … (HDF5 File Format
 * Specification 3.0, section II.A).
 */
export async function hasHdf5Signature(source: ByteSource): Promise<boolean> {
  for (let at = 0; at + 8 <= source.size && at <= 2 ** 20; at = at === 0 ? 512 : at * 2) {
    if (latin1(await source.read(at, 8)) === HDF5_SIGNATURE) return true;
  }
  return false;
}
