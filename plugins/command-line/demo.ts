/** `npm run demo`: builds the site and serves it on this machine. */
import { join } from 'node:path';
import { PROJECT_ROOT, readArguments } from './project.ts';
import { startServer } from './server.ts';
import { buildSite, reportBuild } from './site-build.ts';

export const DEFAULT_PORT = 4870;

const { values } = readArguments(process.argv.slice(2), {
  values: ['port'],
  files: 0,
  usage: 'npm run demo [-- --port N]',
});
const port = Number(values.get('port') ?? DEFAULT_PORT);
if (!Number.isInteger(port) || port < 0 || port > 65535) {
  console.error(
    `--port ${values.get('port')} is no port; expected a whole number up to 65535, such as --port ${DEFAULT_PORT}.`,
  );
  process.exit(2);
}
process.chdir(PROJECT_ROOT);
const folder = join(PROJECT_ROOT, '_site');
reportBuild(await buildSite({ projectRoot: PROJECT_ROOT, output: folder }));
const server = await startServer({ folder, port });
console.log(`The demonstration is at ${server.address} (Ctrl-C ends it)`);
for (const signal of ['SIGINT', 'SIGTERM'] as const) {
  process.on(signal, () => {
    server.close().then(() => process.exit(0));
  });
}
