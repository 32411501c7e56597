// Run by npm before each command: installs the locked packages when what is there does not fit the lock file, Node and this machine. Plain JavaScript
// without dependencies. With `--browser`, also sees to a browser for the tests.
import { spawn, spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import {
  existsSync,
  mkdirSync,
  readFileSync,
  realpathSync,
  rmSync,
  statSync,
  utimesSync,
  writeFileSync,
} from 'node:fs';
import { basename, dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { findBrowser } from './find-browser.mjs';

const root = resolve(dirname(fileURLToPath(import.meta.url)), '../..');
const modules = join(root, 'node_modules');
const stampFile = join(modules, '.ohmfolio-installed');
const lockFolder = join(root, '.cache', 'installing');

/** Milliseconds between signs of life of the command that installs. */
const HEARTBEAT = 1000;

/** Milliseconds without one after which a lock that names no process is left over ... */
const SILENCE = 5000;

/** ... and one whose processes seem to run: their numbers are other processes' by now. */
const LONG_SILENCE = 600_000;

/** Milliseconds that apt-get may take for each step. */
const APT_LIMIT = 600_000;

if (process.argv[1] && realpathSync(process.argv[1]) === realpathSync(fileURLToPath(import.meta.url))) {
  await installPackages();
  if (process.argv.includes('--browser')) installBrowser();
}

/**
 * What the installed packages must fit.
 * @param {string | Uint8Array} lockFile
 * @param {string} nodeVersion
 * @param {string} platform
 * @returns {string}
 */
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
  const heartbeat = setInterval(() => {
    const now = new Date();
    if (existsSync(lockFolder)) utimesSync(lockFolder, now, now);
  }, HEARTBEAT);
  console.error('Installing packages (once; a later run does not) ...');
  // without its stamp an installation counts as none: one that is interrupted is done again
  rmSync(stampFile, { force: true });
  const caller = process.env.npm_execpath ?? '';
  const npm = /^npm.*\.[cm]?js$/.test(basename(caller)) ? caller : undefined;
  const [command, ...first] = npm ? [process.execPath, npm] : [process.platform === 'win32' ? 'npm.cmd' : 'npm'];
  const reason = await new Promise((done) => {
    const child = spawn(command, [...first, 'ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel=error'], {
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
  clearInterval(heartbeat);
  leaveTurn();
  if (reason === '') return;
  console.error(
    `The packages could not be installed: npm ci ${reason}. Check the connection to the package registry, then run the command again.`,
  );
  process.exit(1);
}

/** Making a folder is atomic: whoever makes it installs, the others wait, unless its maker is gone. False: no turn was needed. */
function takeTurn(done) {
  let told = false;
  for (;;) {
    mkdirSync(dirname(lockFolder), { recursive: true });
    try {
      mkdirSync(lockFolder);
      writeFileSync(join(lockFolder, 'processes'), String(process.pid));
      return true;
    } catch (error) {
      if (error.code !== 'EEXIST') throw error;
    }
    if (done()) return false;
    if (isLeftOver()) leaveTurn();
    else {
      if (!told) console.error('Another command is installing packages; waiting for it ...');
      told = true;
      Atomics.wait(new Int32Array(new SharedArrayBuffer(4)), 0, 0, 200);
    }
  }
}

function leaveTurn() {
  rmSync(lockFolder, { recursive: true, force: true });
}

/** Whether all who held the lock are gone. */
function isLeftOver() {
  const seen = statSync(lockFolder, { throwIfNoEntry: false })?.mtimeMs;
  if (seen === undefined) return false;
  const silence = Date.now() - seen;
  const owners = ownersOfTurn();
  return silence > (owners.length === 0 ? SILENCE : LONG_SILENCE) || (owners.length > 0 && !owners.some(isRunning));
}

/** Numbers of the processes that hold the lock; none while they are being written. */
function ownersOfTurn() {
  try {
    return readFileSync(join(lockFolder, 'processes'), 'utf8')
      .split(' ')
      .map(Number)
      .filter((pid) => pid > 0);
  } catch {
    return [];
  }
}

function isRunning(pid) {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return error.code === 'EPERM';
  }
}

function installBrowser() {
  if (findBrowser()) return;
  const isRoot = process.getuid?.() === 0;
  if (isRoot && spawnSync('apt-get', ['--version'], { stdio: 'ignore' }).status === 0) {
    console.error('Installing a browser (the package chromium) for the browser tests ...');
    for (const step of [['update'], ['install', '-y', 'chromium']]) {
      spawnSync('apt-get', ['-qq', ...step], {
        stdio: 'ignore',
        timeout: APT_LIMIT,
        env: { ...process.env, DEBIAN_FRONTEND: 'noninteractive' },
      });
    }
    if (findBrowser()) return;
  }
  console.error(
    'No Chrome or Chromium was found (CHROME_PATH, the PATH, the usual places): the browser tests will be reported as skipped.',
  );
}
