import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { request } from 'node:http';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Grants, NOTHING } from '../../../app/web/grants';
import { CONTENT_SECURITY_POLICY } from '../../../app/web/policy';
import { type RunningServer, startServer } from '../../../app/web/server';

let folder: string;
let server: RunningServer;
let listed: { name: string; files: { path: string; href: string }[] };
const DATA = 'x'.repeat(300_000);

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'server-'));
  const root = join(folder, 'renderer');
  mkdirSync(join(root, 'assets'), { recursive: true });
  writeFileSync(join(root, 'index.html'), '<!doctype html>');
  writeFileSync(join(root, 'assets', 'worker.js'), 'postMessage(1)');
  writeFileSync(join(folder, 'secret.txt'), 'secret');
  mkdirSync(join(folder, 'set'));
  writeFileSync(join(folder, 'set', 'FCIDUMP'), DATA);
  const grants = new Grants();
  const given = await grants.grant([join(folder, 'set')]);
  server = await startServer({ root, grants, given });
  listed = await (await fetch(`${server.url}given/listing.json`)).json();
});
afterAll(() => {
  server.close();
  rmSync(folder, { recursive: true, force: true });
});

/** A request as raw as Node makes it: the path is sent as it is. */
function raw(path: string, { method = 'GET', host }: { method?: string; host?: string } = {}) {
  const { hostname, port } = new URL(server.url);
  return new Promise<{ status: number; headers: NodeJS.Dict<string | string[]>; body: string }>(
    (resolve, reject) => {
      const r = request({ hostname, port, path, method, headers: host ? { host } : {} }, (response) => {
        let body = '';
        response.on('data', (chunk) => {
          body += chunk;
        });
        response.on('end', () => resolve({ status: response.statusCode!, headers: response.headers, body }));
      });
      r.on('error', reject);
      r.end();
    },
  );
}
const base = () => new URL(server.url).pathname;

describe('loopback server', () => {
  it('listens on the loopback address with a token of 24 random bytes as the first path segment', () => {
    expect(server.url).toMatch(/^http:\/\/127\.0\.0\.1:\d+\/[A-Za-z0-9_-]{32}\/$/);
  });

  it('serves the window and its workers with the policy in the header', async () => {
    const page = await raw(base());
    expect(page).toMatchObject({ status: 200, body: '<!doctype html>' });
    expect(page.headers['content-type']).toBe('text/html; charset=utf-8');
    const worker = await raw(`${base()}assets/worker.js`);
    expect(worker.headers['content-type']).toBe('text/javascript; charset=utf-8');
    for (const { headers } of [page, worker]) {
      expect(headers['content-security-policy']).toBe(CONTENT_SECURITY_POLICY);
      expect(headers['x-content-type-options']).toBe('nosniff');
      expect(headers['referrer-policy']).toBe('no-referrer');
      expect(headers['cache-control']).toBe('no-store');
    }
  });

  it('keeps script, connection and frame to itself', () => {
    expect(CONTENT_SECURITY_POLICY).toContain("default-src 'none'");
    expect(CONTENT_SECURITY_POLICY).toContain("frame-ancestors 'none'");
    expect(CONTENT_SECURITY_POLICY).not.toMatch(/script-src[^;]*'unsafe-/);
    expect(CONTENT_SECURITY_POLICY).not.toMatch(/https?:|\*/);
  });

  it('says in the page itself what the header says, but for what a meta tag cannot', () => {
    const page = readFileSync(new URL('../../../renderer/index.html', import.meta.url), 'utf8');
    const meta = /http-equiv="Content-Security-Policy"\s+content="([^"]+)"/.exec(page)?.[1];
    expect(`${meta}; frame-ancestors 'none'`).toBe(CONTENT_SECURITY_POLICY);
  });

  it('refuses any other host name, so that no site can reach it under a name of its own', async () => {
    const { port } = new URL(server.url);
    for (const host of [
      'evil.example',
      `evil.example:${port}`,
      `localhost:${port}`,
      '127.0.0.1',
      `127.0.0.1.:${port}`,
    ])
      expect((await raw(base(), { host })).status, host).toBe(421);
  });

  it('answers nobody without the token', async () => {
    const token = base().slice(1, -1);
    for (const path of [
      '/',
      '/index.html',
      `/${token.slice(0, -1)}/`,
      `/${token}x/`,
      `/${token.toLowerCase()}x/`,
      '//',
    ])
      expect((await raw(path)).status, path).toBe(404);
    expect(await raw(`/${token}`)).toMatchObject({ status: 308, headers: { location: `/${token}/` } });
  });

  it('serves nothing outside the built window', async () => {
    for (const path of [
      '../secret.txt',
      '..%2fsecret.txt',
      'assets/../../secret.txt',
      'assets/..%5c..%5csecret.txt',
      '/etc/hostname',
      '%2e%2e/secret.txt',
      '%',
    ])
      expect((await raw(`${base()}${path}`)).status, path).toBe(403);
    expect((await raw(`${base()}nothing.js`)).status).toBe(404);
    expect((await raw(`${base()}assets`)).status).toBe(404);
  });

  it('streams the files that were named, by opaque id only', async () => {
    expect(listed).toMatchObject({ name: 'set', chosenOneByOne: false });
    expect(listed.files).toHaveLength(1);
    const answer = await raw(`${base()}${listed.files[0]!.href}`);
    expect(answer.status).toBe(200);
    expect(answer.headers['content-length']).toBe(String(DATA.length));
    expect(answer.body).toBe(DATA);
    for (const path of ['given/FCIDUMP', 'given/set/FCIDUMP', `given/${'0'.repeat(32)}`])
      expect((await raw(`${base()}${path}`)).status, path).toBe(404);
  });

  it('takes heartbeats by POST and everything else by GET only', async () => {
    expect((await raw(`${base()}heartbeat`, { method: 'POST' })).status).toBe(204);
    expect((await raw(`${base()}heartbeat`)).status).toBe(405);
    expect((await raw(base(), { method: 'POST' })).status).toBe(405);
    expect((await raw(`${base()}index.html`, { method: 'DELETE' })).status).toBe(405);
  });

  it('ends when it is closed', async () => {
    const other = await startServer({ root: folder, grants: new Grants(), given: NOTHING });
    expect(new URL(other.url).pathname).not.toBe(base());
    other.close();
    await other.closed;
    await expect(fetch(other.url)).rejects.toThrow();
  });
});
