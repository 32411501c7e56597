// Run by npm before each command: installs the locked packages when what is there does not fit the lock file, Node and this machine. Plain JavaScript
// without dependencies. With `--browser`, also sees to a browser for the tests.
import { spawn, spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { findBrowser } from './find-browser.mjs';

const root = resolve(dirname(fileURLToPath(import.meta.url)), '../..');
const modules = join(root, 'node_modules');
const stampFile = join(modules, '.ohmfolio-installed');
const lockFolder = join(root, '.cache', 'installing');

/** A lock without an owner's number is this many milliseconds old before it is taken to be left over. */
const GRACE = 5000;

if (process.argv[1] && resolve(process.argv[1]) === fileURLToPath(import.meta.url)) {
  await installPackages();
  if (process.argv.includes('--browser')) installBrowser();
}

/** What the installed packages must fit. */
export function stampOf(lockFile, nodeVersion, platform) {
  return createHash('sha256').update(lockFile).update(`\n${nodeVersion}\n${platform}`).digest('hex');
}

async function installPackages() {
  const stamp = stampOf(
    readFileSync(join(root, 'package-lock.json')),
    process.version,
    `${process.platform} ${process.arch}`,
  );
  const installed = () => existsSync(stampFile) && readFileSync(stampFile, 'utf8') === stamp;
  if (installed()) return;
  const mine = takeTurn(installed);
  if (installed()) {
    if (mine) leaveTurn();
    return;
  }
  console.error('Installing packages (once; a later run does not) ...');
  // without its stamp an installation counts as none: one that is interrupted is done again
  rmSync(stampFile, { force: true });
  const npm = process.env.npm_execpath;
  const [command, ...first] = npm ? [process.execPath, npm] : [process.platform === 'win32' ? 'npm.cmd' : 'npm'];
  const reason = await new Promise((done) => {
    const child = spawn(command, [...first, 'ci', '--no-audit', '--no-fund', '--loglevel=error'], {
      cwd: root,
      stdio: ['ignore', 2, 2],
      shell: !npm && process.platform === 'win32',
    });
    // npm outlives a killed parent: the turn is npm's too
    if (child.pid) writeFileSync(join(lockFolder, 'processes'), `${process.pid} ${child.pid}`);
    child.on('error', (error) => done(`could not be started (${error.message})`));
    child.on('exit', (status, signal) => done(status === 0 ? '' : `ended with ${signal ?? `status ${status}`}`));
  });
  if (reason === '') writeFileSync(stampFile, stamp);
  leaveTurn();
  if (reason === '') return;
  console.error(
    `The packages could not be installed: npm ci ${reason}. Check the connection to the package registry, then run the command again.`,
  );
  process.exit(1);
}

/** Making a folder is atomic: whoever makes it installs, the others wait, unless its maker is gone. False: no turn was needed. */
function takeTurn(done) {
  const owners = join(lockFolder, 'processes');
  for (;;) {
    mkdirSync(dirname(lockFolder), { recursive: true });
    try {
      mkdirSync(lockFolder);
      writeFileSync(owners, String(process.pid));
      return true;
    } catch (error) {
      if (error.code !== 'EEXIST') throw error;
    }
    if (done()) return false;
    if (isLeftOver(owners)) leaveTurn();
    else Atomics.wait(new Int32Array(new SharedArrayBuffer(4)), 0, 0, 200);
  }
}

function leaveTurn() {
  rmSync(lockFolder, { recursive: true, force: true });
}

/** Whether all who held the lock are gone. */
function isLeftOver(owners) {
  if (!existsSync(owners)) return Date.now() - (statSync(lockFolder, { throwIfNoEntry: false })?.mtimeMs ?? 0) > GRACE;
  return !readFileSync(owners, 'utf8').split(' ').some(isRunning);
}

function isRunning(pid) {
  try {
    process.kill(Number(pid), 0);
    return true;
  } catch (error) {
    return error.code === 'EPERM';
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
