/** A server for one folder, for this machine alone: loopback only, files of the folder only. */
import { existsSync, readFileSync, realpathSync, statSync } from 'node:fs';
import { createServer, type IncomingMessage, type Server, type ServerResponse } from 'node:http';
import { extname, join, relative, resolve, sep } from 'node:path';

export interface RunningServer {
  /** With a slash at its end. */
  readonly address: string;
  readonly port: number;
  readonly close: () => Promise<void>;
  /** Tells open pages to load again; where `reload` was asked for. */
  readonly reload: () => void;
}

const TYPES: { readonly [extension: string]: string } = {
  '.html': 'text/html; charset=utf-8',
  '.css': 'text/css; charset=utf-8',
  '.js': 'text/javascript; charset=utf-8',
  '.mjs': 'text/javascript; charset=utf-8',
  '.csv': 'text/csv; charset=utf-8',
  '.json': 'application/json; charset=utf-8',
  '.txt': 'text/plain; charset=utf-8',
  '.xml': 'application/xml; charset=utf-8',
  '.svg': 'image/svg+xml',
  '.png': 'image/png',
  '.jpg': 'image/jpeg',
  '.jpeg': 'image/jpeg',
  '.gif': 'image/gif',
  '.webp': 'image/webp',
  '.avif': 'image/avif',
  '.ico': 'image/x-icon',
  '.woff2': 'font/woff2',
  '.pdf': 'application/pdf',
};

/** Ports tried after the one that was asked for. */
const PORTS_TRIED = 50;

const RELOAD_PATH = '/-/reload';
const RELOAD_SCRIPT = `new EventSource('${RELOAD_PATH}').onmessage = () => location.reload();`;

/** Serves `folder` on 127.0.0.1 at `port`, or the next free one (0: any). With `reload`, pages load again when told to. */
export async function startServer(options: {
  readonly folder: string;
  readonly port: number;
  readonly reload?: boolean;
}): Promise<RunningServer> {
  const reload = options.reload === true;
  const listeners = new Set<ServerResponse>();
  const server = createServer((request, response) => {
    try {
      if (refuse(request, response)) return;
      if (reload && request.url === RELOAD_PATH) listen(request, response, listeners);
      else answer(request, response, resolve(options.folder), reload);
    } catch {
      // a file that went away between two looks, while the site is built again
      if (!response.headersSent) send(request, response, { status: 500, type: TYPES['.txt']!, body: 'Try again.\n' });
      else response.end();
    }
  });
  const port = await listenOn(server, options.port);
  return {
    address: `http://127.0.0.1:${port}/`,
    port,
    close: () =>
      new Promise((done) => {
        for (const listener of listeners) listener.end();
        server.close(() => done());
        server.closeAllConnections();
      }),
    reload: () => {
      for (const listener of listeners) listener.write('data: reload\n\n');
    },
  };
}

async function listenOn(server: Server, first: number): Promise<number> {
  for (let port = first; ; port++) {
    const outcome = await new Promise<number | NodeJS.ErrnoException>((done) => {
      const failed = (error: NodeJS.ErrnoException): void => done(error);
      server.once('error', failed);
      server.listen(port, '127.0.0.1', () => {
        server.off('error', failed);
        const address = server.address();
        done(typeof address === 'object' && address ? address.port : port);
      });
    });
    if (typeof outcome === 'number') return outcome;
    if (outcome.code !== 'EADDRINUSE' || port >= Math.min(first + PORTS_TRIED, 65535)) throw outcome;
  }
}

/** Turns away what is not for this server; true where it did. */
function refuse(request: IncomingMessage, response: ServerResponse): boolean {
  const host = (request.headers.host ?? '').replace(/:\d+$/, '').toLowerCase();
  // a page elsewhere that had its name point here must get nothing
  if (host !== '127.0.0.1' && host !== 'localhost') {
    send(request, response, { status: 403, type: TYPES['.txt']!, body: 'This server answers this machine only.\n' });
    return true;
  }
  if (request.method === 'GET' || request.method === 'HEAD') return false;
  response.setHeader('Allow', 'GET, HEAD');
  send(request, response, { status: 405, type: TYPES['.txt']!, body: 'Pages can be read only.\n' });
  return true;
}

function listen(request: IncomingMessage, response: ServerResponse, listeners: Set<ServerResponse>): void {
  response.writeHead(200, { 'Content-Type': 'text/event-stream', 'Cache-Control': 'no-store' });
  if (request.method === 'HEAD') return void response.end();
  response.write('\n');
  listeners.add(response);
  response.on('close', () => listeners.delete(response));
}

function answer(request: IncomingMessage, response: ServerResponse, folder: string, reload: boolean): void {
  const url = request.url ?? '/';
  const file = fileFor(url, folder);
  if (file === undefined) return void sendMissing(request, response, folder, reload);
  // relative links of a folder's page need the slash
  if (file.isIndexOf !== undefined && !pathOf(url).endsWith('/')) {
    const path = relative(folder, file.isIndexOf).split(sep).filter(Boolean).map(encodeURIComponent).join('/');
    response.setHeader('Location', `/${path}/${/\?.*$/s.exec(url)?.[0] ?? ''}`);
    return void send(request, response, { status: 301, type: TYPES['.txt']!, body: '' });
  }
  const type = TYPES[extname(file.path).toLowerCase()] ?? 'application/octet-stream';
  const body = readFileSync(file.path);
  send(request, response, { status: 200, type, body: reload ? withReload(body, type) : body });
}

/** The site's page for addresses that have none. It stands in for one further down: its links are relative to the top. */
function sendMissing(request: IncomingMessage, response: ServerResponse, folder: string, reload: boolean): void {
  const page = join(folder, '404.html');
  if (!existsSync(page)) {
    return void send(request, response, { status: 404, type: TYPES['.txt']!, body: 'There is no such page.\n' });
  }
  const depth = pathOf(request.url ?? '/').split('/').length - 2;
  const html = readFileSync(page, 'utf8').replace(/(href=")(?![a-z]+:|#|\/)/g, `$1${'../'.repeat(Math.max(0, depth))}`);
  const type = TYPES['.html']!;
  send(request, response, { status: 404, type, body: reload ? withReload(html, type) : html });
}

function send(
  request: IncomingMessage,
  response: ServerResponse,
  content: { readonly status: number; readonly type: string; readonly body: string | Buffer },
): void {
  response.writeHead(content.status, {
    'Content-Type': content.type,
    'Content-Length': Buffer.byteLength(content.body),
    'Cache-Control': 'no-store',
    'X-Content-Type-Options': 'nosniff',
  });
  if (request.method === 'HEAD') response.end();
  else response.end(content.body);
}

/** A page with the script that loads it again, and a policy that lets it: while developing only. Other files stay as they are. */
function withReload(body: string | Buffer, type: string): string | Buffer {
  if (!type.startsWith('text/html')) return body;
  return body
    .toString('utf8')
    .replace("default-src 'none';", "default-src 'none'; connect-src 'self'; script-src 'unsafe-inline';")
    .replace('</body>', `<script>${RELOAD_SCRIPT}</script></body>`);
}

interface Found {
  readonly path: string;
  /** The folder whose page this is, where the address names the folder. */
  readonly isIndexOf?: string;
}

/** The file that a request asks for, if it lies within the folder. */
function fileFor(url: string, folder: string): Found | undefined {
  let path: string;
  try {
    path = decodeURIComponent(pathOf(url));
  } catch {
    return undefined;
  }
  if (path.includes('\0') || !path.startsWith('/')) return undefined;
  const asked = resolve(folder, `.${path}`);
  if (!within(asked, folder) || !existsSync(asked)) return undefined;
  const isFolder = statSync(asked).isDirectory();
  const file = isFolder ? join(asked, 'index.html') : asked;
  if (!existsSync(file) || !statSync(file).isFile()) return undefined;
  // links are followed only as far as they stay inside
  if (!within(realpathSync(file), realpathSync(folder))) return undefined;
  return isFolder ? { path: file, isIndexOf: asked } : { path: file };
}

function pathOf(url: string): string {
  return url.replace(/[?#].*$/s, '');
}

function within(path: string, folder: string): boolean {
  return path === folder || path.startsWith(folder + sep);
}
