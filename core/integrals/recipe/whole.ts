import { isTrexio, sniffFormat } from '../readers';
import type { ByteSource, ReadPlatform } from '../source';

/**
 * Role of a file that says itself what it holds, or null: `spin-free` for a real FCIDUMP and for TREXIO,
 * `spinor` for an FCIDUMP with TREL or complex values.
 */
export async function wholeRole(
  source: ByteSource,
  platform: ReadPlatform,
): Promise<'spin-free' | 'spinor' | null> {
  const format = await sniffFormat(source);
  if (format === 'fcidump') {
    const head = new TextDecoder('latin1').decode(await source.read(0, 65536));
    return /TREL\s*=\s*\.?T/i.test(head) || /^[ \t]*\(/m.test(head) ? 'spinor' : 'spin-free';
  }
  if (format !== 'hdf5') return null;
  const file = await platform.openHdf5(source);
  try {
    return isTrexio(file) ? 'spin-free' : null;
  } finally {
    file.close();
  }
}

/** Names under which a folder's FCIDUMP is found. */
export const isFcidumpName = (path: string): boolean => /(^|\/)fcidump$|\.fcidump$/i.test(path);
