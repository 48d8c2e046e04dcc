import { createReadStream } from 'node:fs';
import { readFile, stat } from 'node:fs/promises';
import { extname, join } from 'node:path';
import { Readable } from 'node:stream';
import type { Grants, Listing } from './grants';
import { SAFE_HEADERS } from './policy';

const TYPES: Readonly<Record<string, string>> = {
  '.html': 'text/html; charset=utf-8',
  '.js': 'text/javascript; charset=utf-8',
  '.css': 'text/css; charset=utf-8',
  '.json': 'application/json; charset=utf-8',
  '.svg': 'image/svg+xml',
  '.png': 'image/png',
  '.wasm': 'application/wasm',
  '.woff2': 'font/woff2',
};

export interface PagesOptions {
  /** Folder of the built window; nothing outside it is served as a page. */
  readonly root: string;
  readonly grants: Grants;
  /** What was named when the program was started. */
  readonly given: Listing;
}

const answer = (status: number, type: string, body: ConstructorParameters<typeof Response>[0]): Response =>
  new Response(body, { status, headers: { ...SAFE_HEADERS, 'content-type': type } });

const refused = (status: number): Response => answer(status, 'text/plain; charset=utf-8', null);

/** Path inside the built window, or null where the request tries to leave it. */
function insidePath(path: string): string | null {
  let plain: string;
  try {
    plain = decodeURIComponent(path);
  } catch {
    return null;
  }
  if (/[\\\0]/.test(plain)) return null;
  const parts = plain.split('/');
  if (parts.some((part) => part === '..' || part === '.' || part === '')) return null;
  return parts.join('/');
}

/**
 * Answers for the built window, the bundled demo in it, and files the user named: the same for the loopback server
 * and for the desktop's own scheme.
 *
 * @returns a function of the request's path, without its leading slash.
 */
export function makePages({ root, grants, given }: PagesOptions): (path: string) => Promise<Response> {
  return async (path) => {
    if (path === 'given/listing.json') return answer(200, TYPES['.json']!, JSON.stringify(given));
    const granted = /^given\/([0-9a-f]{32})$/.exec(path);
    if (granted) return streamed(grants.pathOf(granted[1]!));
    const inside = insidePath(path === '' ? 'index.html' : path);
    if (inside === null) return refused(403);
    try {
      const body = await readFile(join(root, inside));
      return answer(200, TYPES[extname(inside)] ?? 'application/octet-stream', new Uint8Array(body));
    } catch {
      return refused(404);
    }
  };
}

/** A granted file as a stream, so that its size does not matter. */
async function streamed(path: string | undefined): Promise<Response> {
  if (path === undefined) return refused(404);
  try {
    const { size } = await stat(path);
    const body = Readable.toWeb(createReadStream(path)) as ReadableStream<Uint8Array>;
    const response = answer(200, 'application/octet-stream', body);
    response.headers.set('content-length', String(size));
    return response;
  } catch {
    return refused(404);
  }
}
