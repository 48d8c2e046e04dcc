import { randomBytes, timingSafeEqual } from 'node:crypto';
import { createServer, type IncomingMessage, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import type { Grants, Listing } from './grants';
import { Heartbeat } from './heartbeat';
import { makePages } from './pages';
import { SAFE_HEADERS } from './policy';

export interface ServerOptions {
  readonly root: string;
  readonly grants: Grants;
  readonly given: Listing;
}

export interface RunningServer {
  /** Address of the window, with the token that makes it unguessable. */
  readonly url: string;
  /** Settles when the server has ended, by itself or through `close`. */
  readonly closed: Promise<void>;
  close(): void;
}

const equal = (a: string, b: string): boolean =>
  a.length === b.length && timingSafeEqual(Buffer.from(a), Buffer.from(b));

/**
 * Serves the window to this computer only: loopback address, random port, a random token as the first path segment,
 * and a `Host` header that must name exactly this address, so that no other site can reach it under a name of its own.
 */
export async function startServer({ root, grants, given }: ServerOptions): Promise<RunningServer> {
  const token = randomBytes(24).toString('base64url');
  const pages = makePages({ root, grants, given });
  let host = '';
  const server = createServer((request, response) => {
    void handle(request, response).catch(() => response.destroy());
  });
  const closed = new Promise<void>((resolve) => server.once('close', resolve));
  const close = () => {
    heartbeat.stop();
    server.close();
    server.closeAllConnections();
  };
  const heartbeat = new Heartbeat(close);

  async function handle(request: IncomingMessage, response: ServerResponse): Promise<void> {
    const refuse = (status: number) => response.writeHead(status, SAFE_HEADERS).end();
    if (request.headers.host !== host) return void refuse(421);
    const [, first = '', ...rest] = (request.url ?? '').split('?')[0]!.split('/');
    if (!equal(first, token)) return void refuse(404);
    const path = rest.join('/');
    if (path === 'heartbeat') {
      if (request.method !== 'POST') return void refuse(405);
      heartbeat.beat();
      return void refuse(204);
    }
    if (request.method !== 'GET') return void refuse(405);
    // Without the slash at the end, relative addresses of the page would lose the token.
    if (rest.length === 0)
      return void response.writeHead(308, { ...SAFE_HEADERS, location: `/${token}/` }).end();
    const answer = await pages(path);
    response.writeHead(answer.status, Object.fromEntries(answer.headers));
    if (!answer.body) return void response.end();
    await pipeline(Readable.fromWeb(answer.body as import('node:stream/web').ReadableStream), response);
  }

  await new Promise<void>((resolve, reject) => {
    server.once('error', reject);
    server.listen(0, '127.0.0.1', resolve);
  });
  host = `127.0.0.1:${(server.address() as AddressInfo).port}`;
  return { url: `http://${host}/${token}/`, closed, close };
}
