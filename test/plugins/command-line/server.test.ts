/** The static server: what it gives, and what it keeps to itself. */
import { mkdirSync, mkdtempSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { type IncomingHttpHeaders, request } from 'node:http';
import { createServer } from 'node:net';
import { networkInterfaces, tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type RunningServer, startServer } from '../../../plugins/command-line/server.ts';

let folder: string;
let server: RunningServer;

beforeAll(async () => {
  const root = mkdtempSync(join(tmpdir(), 'server-'));
  folder = join(root, 'site');
  mkdirSync(join(folder, 'notes/a b'), { recursive: true });
  mkdirSync(join(root, 'site-not'));
  writeFileSync(join(root, 'secret.txt'), 'secret');
  writeFileSync(join(root, 'site-not/secret.txt'), 'secret');
  writeFileSync(join(folder, 'index.html'), '<body>home</body>');
  writeFileSync(join(folder, 'notes/a b/index.html'), '<body>note</body>');
  writeFileSync(join(folder, '404.html'), '<link href="style.css"><a href="#top">top</a><body>none</body>');
  writeFileSync(join(folder, 'data.csv'), 't,v\n0,1\n');
  writeFileSync(join(folder, 'plot.svg'), '<svg/>');
  symlinkSync(join(root, 'secret.txt'), join(folder, 'link.txt'));
  symlinkSync(root, join(folder, 'up'));
  symlinkSync(join(folder, 'data.csv'), join(folder, 'inner.csv'));
  server = await startServer({ folder, port: 0 });
});

afterAll(async () => {
  await server.close();
  rmSync(join(folder, '..'), { recursive: true, force: true });
});

interface Answer {
  readonly status: number;
  readonly headers: IncomingHttpHeaders;
  readonly body: string;
}

/** A request whose path goes out as it is written: `fetch` would tidy it up. */
function get(path: string, options: { method?: string; host?: string; at?: RunningServer } = {}): Promise<Answer> {
  const { port } = options.at ?? server;
  const headers = { Host: options.host ?? `127.0.0.1:${port}` };
  return new Promise((done, failed) => {
    request({ host: '127.0.0.1', port, path, method: options.method ?? 'GET', headers, agent: false }, (response) => {
      let body = '';
      response.on('data', (chunk) => {
        body += chunk;
      });
      response.on('end', () => done({ status: response.statusCode ?? 0, headers: response.headers, body }));
    })
      .on('error', failed)
      .end();
  });
}

describe('what is given', () => {
  it.each([
    ['/', 200, 'text/html; charset=utf-8', '<body>home</body>'],
    ['/index.html?x=1#y', 200, 'text/html; charset=utf-8', '<body>home</body>'],
    ['/notes/a%20b/', 200, 'text/html; charset=utf-8', '<body>note</body>'],
    ['/data.csv', 200, 'text/csv; charset=utf-8', 't,v\n0,1\n'],
    ['/inner.csv', 200, 'text/csv; charset=utf-8', 't,v\n0,1\n'],
    ['/plot.svg', 200, 'image/svg+xml', '<svg/>'],
  ])('%s', async (path, status, type, body) => {
    expect(await get(path)).toMatchObject({ status, body, headers: { 'content-type': type } });
  });

  it('gives the head alone when asked for it', async () => {
    const { status, headers, body } = await get('/data.csv', { method: 'HEAD' });
    expect({ status, length: headers['content-length'], body }).toEqual({ status: 200, length: '8', body: '' });
  });

  it('sends a folder without its slash on to the one with it, never to another machine', async () => {
    expect(await get('/notes/a%20b?x=1')).toMatchObject({ status: 301, headers: { location: '/notes/a%20b/?x=1' } });
    expect(await get('//notes/a%20b')).toMatchObject({ status: 301, headers: { location: '/notes/a%20b/' } });
  });

  it('answers with the page for missing pages, its links as seen from the top', async () => {
    const { status, body } = await get('/notes/none.html');
    expect(status).toBe(404);
    expect(body).toContain('href="../style.css"');
    expect(body).toContain('href="#top"');
  });
});

describe('what is kept', () => {
  it.each([
    '/../secret.txt',
    '/%2e%2e/secret.txt',
    '/..%2fsecret.txt',
    '/notes/../../secret.txt',
    '/..%5csecret.txt',
    '/%252e%252e/secret.txt',
    '/../site-not/secret.txt',
    '/link.txt',
    '/up/secret.txt',
    '/index.html%00.txt',
    '/%e0%a4%a',
    'secret.txt',
    '/index.html/x',
  ])('%s is not found', async (path) => {
    const { status, body } = await get(path);
    // a path without its slash is no request at all
    expect([400, 404]).toContain(status);
    expect(body).not.toContain('secret');
  });

  it.each(['example.org', 'example.org:80', '127.0.0.1.example.org', '10.0.0.1'])(
    'nothing for the host `%s`',
    async (host) => {
      const { status, body } = await get('/', { host });
      expect([400, 403]).toContain(status);
      expect(body).not.toContain('home');
    },
  );

  it('is this machine’s by either name', async () => {
    expect((await get('/', { host: 'localhost:1234' })).status).toBe(200);
    expect((await get('/', { host: 'LOCALHOST' })).status).toBe(200);
  });

  it.each(['POST', 'PUT', 'DELETE', 'OPTIONS'])('%s is not taken', async (method) => {
    expect(await get('/', { method })).toMatchObject({ status: 405, headers: { allow: 'GET, HEAD' } });
  });

  it('listens on the loopback address alone', async () => {
    const others = Object.values(networkInterfaces())
      .flatMap((list) => list ?? [])
      .filter(({ internal, family }) => !internal && family === 'IPv4');
    for (const { address } of others) await expect(fetch(`http://${address}:${server.port}/`)).rejects.toThrow();
    expect(server.address).toBe(`http://127.0.0.1:${server.port}/`);
  });
});

describe('the port', () => {
  it('is the next free one where the first is taken', async () => {
    const taken = createServer();
    await new Promise<void>((done) => taken.listen(0, '127.0.0.1', done));
    const { port } = taken.address() as { port: number };
    const other = await startServer({ folder, port });
    expect(other.port).toBeGreaterThan(port);
    expect((await get('/', { at: other })).status).toBe(200);
    await other.close();
    await new Promise((done) => taken.close(done));
  });
});

describe('loading pages again', () => {
  it('is in no page unless asked for', async () => {
    expect((await get('/')).body).not.toContain('<script');
    expect((await get('/-/reload')).status).toBe(404);
  });

  it('tells open pages, which the policy of the page lets listen', async () => {
    writeFileSync(join(folder, 'policy.html'), `<meta content="default-src 'none'; img-src 'self'"><body></body>`);
    const reloading = await startServer({ folder, port: 0, reload: true });
    const page = (await get('/policy.html', { at: reloading })).body;
    expect(page).toMatch(
      /connect-src 'self'; script-src 'unsafe-inline'; img-src 'self'.*<script>.*<\/script><\/body>/s,
    );
    expect((await get('/data.csv', { at: reloading })).body).not.toContain('<script');
    expect((await get('/-/reload', { at: reloading, host: 'example.org' })).status).toBe(403);
    const stream = (await fetch(`${reloading.address}-/reload`)).body!.getReader();
    await stream.read();
    reloading.reload();
    const { value } = await stream.read();
    expect(new TextDecoder().decode(value)).toBe('data: reload\n\n');
    await stream.cancel();
    await reloading.close();
  });
});
