/** `npm run dev`: builds, serves, and builds again when something changes; open pages load again. A mistake never ends it. */
import { type ChildProcess, spawn } from 'node:child_process';
import { join } from 'node:path';
import { PROJECT_ROOT, readArguments, readPort, reasonOf, stop } from './project.ts';
import { startServer } from './server.ts';
import { watchFolders } from './watch-folders.ts';

/** Milliseconds without a further change before a build begins: editors save in several strokes. */
const QUIET = 120;

const WATCHED = ['content', 'plugins', 'solver', 'site'];

const port = readPort(
  readArguments(process.argv.slice(2), { values: ['port'], files: 0, usage: 'npm run dev [-- --port N]' }),
);
let child: ChildProcess | undefined;
for (const signal of ['SIGINT', 'SIGTERM'] as const) {
  process.on(signal, () => {
    child?.kill();
    process.exit(0);
  });
}

/** A fresh process for each build, so that edited program files count too; whether there is a new site. */
function build(): Promise<boolean> {
  return new Promise((done) => {
    child = spawn(process.execPath, ['--import', 'tsx', join(PROJECT_ROOT, 'plugins/command-line/build.ts')], {
      cwd: PROJECT_ROOT,
      stdio: 'inherit',
    });
    // status 2: built, with problems that the pages show
    child.on('exit', (status) => done(status === 0 || status === 2));
    child.on('error', () => done(false));
  });
}

let timer: NodeJS.Timeout | undefined;
let building = false;
let again = false;
let reload = (): void => {};

async function rebuild(): Promise<void> {
  if (building) {
    again = true;
    return;
  }
  building = true;
  do {
    again = false;
    if (await build()) reload();
    else console.error('The last site stays until the mistake is gone.');
  } while (again);
  building = false;
}

// watched before the first build: what is saved meanwhile counts
watchFolders(
  WATCHED.map((name) => join(PROJECT_ROOT, name)),
  (_, name) => {
    // what editors keep beside a file while it is open
    if (/^\.|~$/.test(name)) return;
    clearTimeout(timer);
    timer = setTimeout(rebuild, QUIET);
  },
);
await rebuild();
try {
  const server = await startServer({ folder: join(PROJECT_ROOT, '_site'), port, reload: true });
  reload = server.reload;
  console.log(`Watching; the site is at ${server.address} (Ctrl-C ends it)`);
} catch (error) {
  stop(1, `The site cannot be served at port ${port}: ${reasonOf(error)}`);
}
