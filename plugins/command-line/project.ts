/** Where the project lies, and what a command was given. */
import { dirname, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';

export const PROJECT_ROOT = resolve(dirname(fileURLToPath(import.meta.url)), '../..');

const DEFAULT_PORT = 4870;

/** A path that the caller wrote, as seen from the caller's folder (npm runs commands in the project's). */
export function fromCaller(path: string): string {
  return resolve(process.env.INIT_CWD ?? process.cwd(), path);
}

export interface Arguments {
  readonly flags: ReadonlySet<string>;
  readonly values: ReadonlyMap<string, string>;
  readonly files: readonly string[];
}

export interface KnownArguments {
  readonly flags?: readonly string[];
  readonly values?: readonly string[];
  /** Most files that may be named. */
  readonly files: number;
  readonly usage: string;
}

/** Takes `--flag`, `--name VALUE`, `--name=VALUE` and files apart; anything unknown is refused: one line of usage, exit status 2. */
export function readArguments(
  argv: readonly string[],
  known: KnownArguments,
  refuse: (reason: string) => never = (reason) => stop(2, `${reason} Usage: ${known.usage}`),
): Arguments {
  const flags = new Set<string>();
  const values = new Map<string, string>();
  const files: string[] = [];
  for (let k = 0; k < argv.length; k++) {
    const argument = argv[k]!;
    if (!argument.startsWith('-')) {
      files.push(argument);
      continue;
    }
    const [, name = '', value] = /^--([^=]*)(?:=(.*))?$/s.exec(argument) ?? [];
    if (known.flags?.includes(name) && value === undefined) flags.add(name);
    else if (known.values?.includes(name)) {
      const stated = value ?? argv[++k];
      if (!stated) refuse(`--${name} needs a value.`);
      values.set(name, stated!);
    } else refuse(`Unknown option ${argument}.`);
  }
  if (files.length > known.files) refuse(`Unknown argument ${files[known.files]}.`);
  return { flags, values, files };
}

/** The port of `--port N`, or the usual one; 0 is any that is free. */
export function readPort({ values }: Arguments): number {
  const stated = values.get('port');
  if (stated === undefined) return DEFAULT_PORT;
  if (!/^\d{1,5}$/.test(stated) || Number(stated) > 65535) {
    stop(2, `--port ${stated} is no port; expected a whole number up to 65535, such as --port ${DEFAULT_PORT}.`);
  }
  return Number(stated);
}

/** Ends the command with a line on stderr. */
export function stop(status: number, message: string): never {
  console.error(message);
  process.exit(status);
}

/** What an error and those that it wraps say, outermost first, in one line. */
export function reasonOf(error: unknown): string {
  if (!(error instanceof Error)) return String(error);
  const inner = (error as Error & { originalError?: unknown }).originalError ?? error.cause;
  return inner === undefined || inner === error ? error.message : `${error.message}: ${reasonOf(inner)}`;
}
