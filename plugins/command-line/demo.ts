/** `npm run demo`: builds the site and serves it on this machine. */
import { join } from 'node:path';
import { PROJECT_ROOT, readArguments, readPort, reasonOf, stop } from './project.ts';
import { startServer } from './server.ts';
import { buildSite, reportBuild } from './site-build.ts';

const port = readPort(
  readArguments(process.argv.slice(2), { values: ['port'], files: 0, usage: 'npm run demo [-- --port N]' }),
);
for (const signal of ['SIGINT', 'SIGTERM'] as const) process.on(signal, () => process.exit(0));
process.chdir(PROJECT_ROOT);
const folder = join(PROJECT_ROOT, '_site');
try {
  reportBuild(await buildSite({ projectRoot: PROJECT_ROOT, output: folder }));
} catch (error) {
  stop(1, `The site could not be built: ${reasonOf(error)}`);
}
try {
  const server = await startServer({ folder, port });
  console.log(`The demonstration is at ${server.address} (Ctrl-C ends it)`);
} catch (error) {
  stop(1, `The site cannot be served at port ${port}: ${reasonOf(error)}`);
}
