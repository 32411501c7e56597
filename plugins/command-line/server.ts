/** A server for one folder, for this machine alone: loopback only, files of the folder only. */
import { createReadStream, existsSync, readFileSync, realpathSync, statSync } from 'node:fs';
import { createServer, type IncomingMessage, type Server, type ServerResponse } from 'node:http';
import { extname, join, resolve, sep } from 'node:path';

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
  '.csv': 'text/csv; charset=utf-8',
  '.json': 'application/json; charset=utf-8',
  '.svg': 'image/svg+xml',
  '.js': 'text/javascript; charset=utf-8',
  '.txt': 'text/plain; charset=utf-8',
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
  const listeners = new Set<ServerResponse>();
  const server = createServer((request, response) => {
    try {
      if (options.reload && request.url === RELOAD_PATH) listen(response, listeners);
      else answer(request, response, resolve(options.folder), options.reload === true);
    } catch {
      if (!response.headersSent) response.writeHead(500).end();
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
    if (outcome.code !== 'EADDRINUSE' || port >= first + PORTS_TRIED) throw outcome;
  }
}

function listen(response: ServerResponse, listeners: Set<ServerResponse>): void {
  response.writeHead(200, { 'Content-Type': 'text/event-stream', 'Cache-Control': 'no-store' });
  response.write('\n');
  listeners.add(response);
  response.on('close', () => listeners.delete(response));
}

function answer(request: IncomingMessage, response: ServerResponse, folder: string, reload: boolean): void {
  const host = (request.headers.host ?? '').replace(/:\d+$/, '');
  // a page elsewhere that had its name point here must get nothing
  if (host !== '127.0.0.1' && host !== 'localhost')
    return void response.writeHead(403).end('This server answers this machine only.\n');
  if (request.method !== 'GET' && request.method !== 'HEAD') {
    return void response.writeHead(405, { Allow: 'GET, HEAD' }).end();
  }
  const file = fileFor(request.url ?? '/', folder);
  const found = file ?? join(folder, '404.html');
  const type = TYPES[extname(found).toLowerCase()] ?? 'application/octet-stream';
  const headers = { 'Content-Type': type, 'Cache-Control': 'no-store', 'X-Content-Type-Options': 'nosniff' };
  if (!existsSync(found)) return void response.writeHead(404, { 'Content-Type': 'text/plain' }).end('Not found\n');
  response.writeHead(file === undefined ? 404 : 200, headers);
  if (request.method === 'HEAD') return void response.end();
  const depth = file === undefined ? (request.url ?? '/').replace(/[?#].*$/s, '').split('/').length - 2 : 0;
  if (depth > 0) {
    // the page stands in for one further down: its links are relative to the top
    const page = readFileSync(found, 'utf8');
    return void response.end(page.replace(/(href=")(?![a-z]+:|#|\/)/g, `$1${'../'.repeat(depth)}`));
  }
  if (!reload || !type.startsWith('text/html')) return void createReadStream(found).pipe(response);
  const chunks: Buffer[] = [];
  createReadStream(found)
    .on('data', (chunk) => chunks.push(Buffer.from(chunk)))
    .on('end', () => response.end(withReload(Buffer.concat(chunks).toString('utf8'))));
}

/** The page with the script that loads it again, and a policy that lets it: while developing only. */
function withReload(html: string): string {
  return html
    .replace("default-src 'none';", "default-src 'none'; connect-src 'self'; script-src 'unsafe-inline';")
    .replace('</body>', `<script>${RELOAD_SCRIPT}</script></body>`);
}

/** The file that a request asks for, if it lies within the folder. */
function fileFor(url: string, folder: string): string | undefined {
  let path: string;
  try {
    path = decodeURIComponent(url.replace(/[?#].*$/s, ''));
  } catch {
    return undefined;
  }
  if (path.includes('\0')) return undefined;
  let file = resolve(folder, `.${path.startsWith('/') ? path : `/${path}`}`);
  if (!within(file, folder) || !existsSync(file)) return undefined;
  if (statSync(file).isDirectory()) file = join(file, 'index.html');
  if (!existsSync(file)) return undefined;
  // links are followed only as far as they stay inside
  return within(realpathSync(file), realpathSync(folder)) ? file : undefined;
}

function within(path: string, folder: string): boolean {
  return path === folder || path.startsWith(folder + sep);
}
