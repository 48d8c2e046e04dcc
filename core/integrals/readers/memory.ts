import type { ByteSource, FileSet } from '../source';

/** A source over bytes in memory. */
export function memorySource(path: string, content: Uint8Array | string): ByteSource {
  const bytes = typeof content === 'string' ? new TextEncoder().encode(content) : content;
  return {
    path,
    size: bytes.length,
    read: async (offset, length) => bytes.slice(offset, offset + length),
  };
}

/** A data set held in memory: for tests and for small generated input. Order of the map is kept. */
export function fileSetFromMemory(name: string, files: ReadonlyMap<string, Uint8Array | string>): FileSet {
  const sources = new Map([...files].map(([path, content]) => [path, memorySource(path, content)]));
  return { name, list: () => [...sources.values()], open: (path) => sources.get(path) };
}
