/** The general-purpose peers in C: built where a compiler and their libraries are, run in the same benchmark, named as missing elsewhere. */
import { spawnSync } from 'node:child_process';
import { existsSync, mkdirSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';

const sources = join(dirname(fileURLToPath(import.meta.url)), 'peers');
const builds = resolve(sources, '../../../.cache/bench');

export const REFERENCE_FILE = join(sources, 'reference.txt');

export interface PeerRecord {
  readonly w: string;
  readonly peer: string;
  readonly [key: string]: string | number | null;
}

const PROGRAMS = {
  radau: ['-lm'],
  ida: [
    '-I/usr/include/suitesparse',
    ...['idas', 'nvecserial', 'sunmatrixdense', 'sunmatrixsparse', 'sunlinsoldense', 'sunlinsolklu'].map(
      (name) => `-lsundials_${name}`,
    ),
    '-lklu',
    '-lm',
  ],
  linear: ['-lklu', '-lm'],
} as const;

/** Builds and runs one peer; its records, or why there are none. */
export function runPeer(
  program: keyof typeof PROGRAMS,
  secondsEach: number,
  ...options: string[]
): readonly PeerRecord[] | string {
  const missing = prepare(program);
  if (missing) return missing;
  mkdirSync(builds, { recursive: true });
  const binary = join(builds, program);
  const build = spawnSync(
    'gcc',
    ['-O2', `-I${sources}`, '-o', binary, join(sources, `${program}.c`), ...PROGRAMS[program]],
    { encoding: 'utf8' },
  );
  if (build.status !== 0) return `the peer ${program} does not build here: ${build.stderr.split('\n')[0]}`;
  const run = spawnSync(binary, options, {
    encoding: 'utf8',
    maxBuffer: 1 << 26,
    env: { ...process.env, PEERS_BUDGET: String(secondsEach), PEERS_REF: REFERENCE_FILE },
  });
  if (run.status !== 0) return `the peer ${program} failed here`;
  return run.stdout
    .trim()
    .split('\n')
    .map((line) => JSON.parse(line) as PeerRecord);
}

/** Installs what is missing where that is allowed; says what still is. */
function prepare(program: keyof typeof PROGRAMS): string | undefined {
  const needs =
    program === 'radau' ? [] : program === 'ida' ? ['/usr/include/idas/idas.h'] : ['/usr/include/suitesparse/klu.h'];
  const lacking = (): boolean =>
    spawnSync('gcc', ['--version']).status !== 0 || needs.some((file) => !existsSync(file));
  if (lacking() && process.getuid?.() === 0 && spawnSync('apt-get', ['--version']).status === 0) {
    const install = (): void => {
      spawnSync('apt-get', ['install', '-y', '-qq', 'gcc', 'libc6-dev', 'libsundials-dev', 'libsuitesparse-dev']);
    };
    install();
    if (lacking()) {
      spawnSync('apt-get', ['update', '-qq']);
      install();
    }
  }
  return lacking()
    ? `the peer ${program} is missing: it needs gcc and Debian’s libsundials-dev and libsuitesparse-dev`
    : undefined;
}
