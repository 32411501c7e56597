/** What is installed, and when: the script in a project of its own, with a stand-in for npm that writes down that it ran. */
import { type ChildProcess, spawn } from 'node:child_process';
import {
  copyFileSync,
  existsSync,
  mkdirSync,
  mkdtempSync,
  readFileSync,
  realpathSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { stampOf } from '../../../plugins/command-line/ensure-installed.mjs';
import { findBrowser } from '../../../plugins/command-line/find-browser.mjs';

/** Installs one package; takes `slow` milliseconds; ends with the status in `status`, where there is one. */
const STAND_IN = `
import { appendFileSync, existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs';
appendFileSync('npm-ran', process.argv.slice(2).join(' ') + '\\n');
rmSync('node_modules', { recursive: true, force: true });
if (existsSync('slow')) await new Promise((done) => setTimeout(done, Number(readFileSync('slow', 'utf8'))));
if (existsSync('status')) process.exit(Number(readFileSync('status', 'utf8')));
mkdirSync('node_modules/some-package', { recursive: true });
`;

let root: string;
const children: ChildProcess[] = [];

beforeEach(() => {
  root = realpathSync(mkdtempSync(join(tmpdir(), 'installed-')));
  mkdirSync(join(root, 'plugins/command-line'), { recursive: true });
  for (const name of ['ensure-installed.mjs', 'find-browser.mjs']) {
    copyFileSync(`plugins/command-line/${name}`, join(root, 'plugins/command-line', name));
  }
  writeFileSync(join(root, 'package-lock.json'), '{ "lockfileVersion": 3 }');
  writeFileSync(join(root, 'npm-cli.mjs'), STAND_IN);
});

afterEach(() => {
  for (const child of children.splice(0)) child.kill('SIGKILL');
  rmSync(root, { recursive: true, force: true });
});

function start(): { child: ChildProcess; ended: Promise<{ status: number | null; said: string }> } {
  const child = spawn(process.execPath, ['plugins/command-line/ensure-installed.mjs'], {
    cwd: root,
    env: { ...process.env, npm_execpath: join(root, 'npm-cli.mjs') },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  children.push(child);
  let said = '';
  child.stdout.on('data', (chunk) => {
    said += chunk;
  });
  child.stderr.on('data', (chunk) => {
    said += chunk;
  });
  return { child, ended: new Promise((done) => child.on('close', (status) => done({ status, said }))) };
}

const run = () => start().ended;
const timesRun = (): number =>
  existsSync(join(root, 'npm-ran')) ? readFileSync(join(root, 'npm-ran'), 'utf8').trim().split('\n').length : 0;

describe('the stamp', () => {
  it('depends on the lock file, on Node and on the platform', () => {
    const stamps = [
      stampOf('a', 'v20.19.0', 'linux x64'),
      stampOf('b', 'v20.19.0', 'linux x64'),
      stampOf('a', 'v22.0.0', 'linux x64'),
      stampOf('a', 'v20.19.0', 'darwin arm64'),
    ];
    expect(new Set(stamps).size).toBe(4);
    expect(stampOf(Buffer.from('a'), 'v20.19.0', 'linux x64')).toBe(stamps[0]);
  });
});

describe('installing', () => {
  it('happens once, from the lock file, with what the tests need', async () => {
    expect((await run()).status).toBe(0);
    expect(await run()).toEqual({ status: 0, said: '' });
    expect(timesRun()).toBe(1);
    expect(readFileSync(join(root, 'npm-ran'), 'utf8')).toMatch(/^ci .*--include=dev/);
  });

  it('happens again when the lock file has changed, or the packages are gone', async () => {
    await run();
    writeFileSync(join(root, 'package-lock.json'), '{ "lockfileVersion": 3, "packages": {} }');
    await run();
    expect(timesRun()).toBe(2);
    rmSync(join(root, 'node_modules'), { recursive: true });
    await run();
    expect(timesRun()).toBe(3);
  });

  it('fails with a line that says so, and is done again', async () => {
    writeFileSync(join(root, 'status'), '1');
    const { status, said } = await run();
    expect(status).toBe(1);
    expect(said.trim().split('\n').at(-1)).toMatch(/could not be installed: npm ci ended with status 1\. Check/);
    rmSync(join(root, 'status'));
    expect((await run()).status).toBe(0);
    expect(timesRun()).toBe(2);
  });

  it('is done once by two commands at the same time', async () => {
    writeFileSync(join(root, 'slow'), '800');
    const both = await Promise.all([run(), run()]);
    expect(both.map(({ status }) => status)).toEqual([0, 0]);
    expect(timesRun()).toBe(1);
    expect(existsSync(join(root, '.cache/installing'))).toBe(false);
  });

  it('is done again after one that was killed, npm and all', async () => {
    writeFileSync(join(root, 'slow'), '60000');
    const { child, ended } = start();
    const processes = join(root, '.cache/installing/processes');
    await vi.waitFor(() => expect(readFileSync(processes, 'utf8')).toMatch(/^\d+ \d+$/), { timeout: 10_000 });
    await vi.waitFor(() => expect(timesRun()).toBe(1), { timeout: 10_000 });
    const npm = Number(readFileSync(processes, 'utf8').split(' ')[1]);
    child.kill('SIGKILL');
    process.kill(npm, 'SIGKILL');
    await ended;
    rmSync(join(root, 'slow'));
    expect((await run()).status).toBe(0);
    expect(timesRun()).toBe(2);
  });
});

describe('the browser', () => {
  it('is the one that CHROME_PATH names, where that is a program', () => {
    const before = process.env.CHROME_PATH;
    try {
      process.env.CHROME_PATH = process.execPath;
      expect(findBrowser()).toBe(process.execPath);
      process.env.CHROME_PATH = root;
      expect(findBrowser()).not.toBe(root);
    } finally {
      if (before === undefined) delete process.env.CHROME_PATH;
      else process.env.CHROME_PATH = before;
    }
  });
});
