/** `npm run dev`: builds, serves, and builds again when something changes; open pages load again. A mistake never ends it. */
import { spawn } from 'node:child_process';
import { existsSync, watch } from 'node:fs';
import { join } from 'node:path';
import { PROJECT_ROOT, readArguments } from './project.ts';
import { startServer } from './server.ts';

/** Milliseconds without a further change before a build begins: editors save in several strokes. */
const QUIET = 120;

const { values } = readArguments(process.argv.slice(2), {
  values: ['port'],
  files: 0,
  usage: 'npm run dev [-- --port N]',
});
const folder = join(PROJECT_ROOT, '_site');

/** A fresh process for each build, so that edited program files count too. */
function build(): Promise<number> {
  return new Promise((done) => {
    const child = spawn(process.execPath, ['--import', 'tsx', join(PROJECT_ROOT, 'plugins/command-line/build.ts')], {
      cwd: PROJECT_ROOT,
      stdio: 'inherit',
    });
    child.on('exit', (code) => done(code ?? 1));
    child.on('error', () => done(1));
  });
}

await build();
const server = await startServer({ folder, port: Number(values.get('port') ?? 4870), reload: true });
console.log(`Watching; the site is at ${server.address} (Ctrl-C ends it)`);

let timer: NodeJS.Timeout | undefined;
let building = false;
let again = false;

async function rebuild(): Promise<void> {
  if (building) {
    again = true;
    return;
  }
  building = true;
  do {
    again = false;
    await build();
    server.reload();
  } while (again);
  building = false;
}

for (const name of ['content', 'plugins', 'solver', 'site', 'eleventy.config.ts']) {
  const path = join(PROJECT_ROOT, name);
  if (!existsSync(path)) continue;
  watch(path, { recursive: name !== 'eleventy.config.ts' }, () => {
    clearTimeout(timer);
    timer = setTimeout(rebuild, QUIET);
  });
}
for (const signal of ['SIGINT', 'SIGTERM'] as const) process.on(signal, () => process.exit(0));
