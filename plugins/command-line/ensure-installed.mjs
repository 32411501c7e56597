// Run by npm before each command: installs the locked packages when what is there does not fit the lock file, Node and this machine. Plain JavaScript
// without dependencies. With `--browser`, also sees to a browser for the tests.
import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { findBrowser } from './find-browser.mjs';

const root = resolve(dirname(fileURLToPath(import.meta.url)), '../..');
const modules = join(root, 'node_modules');
const stampFile = join(modules, '.ohmfolio-installed');
const lockFolder = join(root, '.cache', 'installing');

/** An install that has not ended after this many milliseconds has died. */
const STALE = 15 * 60 * 1000;

if (process.argv[1] && resolve(process.argv[1]) === fileURLToPath(import.meta.url)) {
  installPackages();
  if (process.argv.includes('--browser')) installBrowser();
}

/** What the installed packages must fit. */
export function stampOf(lockFile, nodeVersion, platform) {
  return createHash('sha256').update(lockFile).update(`\n${nodeVersion}\n${platform}`).digest('hex');
}

function installPackages() {
  const stamp = stampOf(
    readFileSync(join(root, 'package-lock.json')),
    process.version,
    `${process.platform} ${process.arch}`,
  );
  const installed = () => existsSync(stampFile) && readFileSync(stampFile, 'utf8') === stamp;
  if (installed()) return;
  waitForTurn(installed);
  if (installed()) return;
  try {
    console.error('Installing packages (once; a later run does not) ...');
    rmSync(stampFile, { force: true });
    const npm = process.env.npm_execpath;
    const [command, ...first] = npm ? [process.execPath, npm] : [process.platform === 'win32' ? 'npm.cmd' : 'npm'];
    const run = spawnSync(command, [...first, 'ci', '--no-audit', '--no-fund', '--loglevel=error'], {
      cwd: root,
      stdio: ['ignore', 2, 2],
    });
    if (run.status !== 0) {
      console.error(
        `The packages could not be installed: npm ci ended with ${run.status ?? run.error?.message}. Check the connection to the package registry and run the command again.`,
      );
      process.exitCode = 1;
      process.exit(1);
    }
    writeFileSync(stampFile, stamp);
  } finally {
    rmSync(lockFolder, { recursive: true, force: true });
  }
}

/** Making a folder is atomic: whoever makes it installs, the others wait. */
function waitForTurn(done) {
  for (;;) {
    try {
      mkdirSync(dirname(lockFolder), { recursive: true });
      mkdirSync(lockFolder);
      return;
    } catch {
      if (done()) return;
      const age = existsSync(lockFolder) ? Date.now() - statSync(lockFolder).mtimeMs : 0;
      if (age > STALE) rmSync(lockFolder, { recursive: true, force: true });
      Atomics.wait(new Int32Array(new SharedArrayBuffer(4)), 0, 0, 500);
    }
  }
}

function installBrowser() {
  if (findBrowser()) return;
  const isRoot = process.getuid?.() === 0;
  if (isRoot && spawnSync('apt-get', ['--version'], { stdio: 'ignore' }).status === 0) {
    console.error('Installing Debian’s chromium for the browser tests ...');
    const options = {
      stdio: ['ignore', 'ignore', 'inherit'],
      env: { ...process.env, DEBIAN_FRONTEND: 'noninteractive' },
    };
    const install = () => spawnSync('apt-get', ['install', '-y', '-qq', 'chromium'], options).status === 0;
    if (!install()) {
      spawnSync('apt-get', ['update', '-qq'], options);
      install();
    }
    if (findBrowser()) return;
  }
  console.error(
    'No Chrome or Chromium was found (CHROME_PATH, the PATH, the usual places): the browser tests will be reported as skipped.',
  );
}
