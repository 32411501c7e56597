/** Where the project lies, and what a command was given. */
import { dirname, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';

export const PROJECT_ROOT = resolve(dirname(fileURLToPath(import.meta.url)), '../..');

/** A path that the caller wrote, as seen from the caller's folder (npm runs commands in the project's). */
export function fromCaller(path: string): string {
  return resolve(process.env.INIT_CWD ?? process.cwd(), path);
}

export interface Arguments {
  readonly flags: ReadonlySet<string>;
  readonly values: ReadonlyMap<string, string>;
  readonly files: readonly string[];
}

/** Takes `--flag`, `--name VALUE`, `--name=VALUE` and files apart; one line of usage and exit status 2 for anything unknown. */
export function readArguments(
  argv: readonly string[],
  known: {
    readonly flags?: readonly string[];
    readonly values?: readonly string[];
    readonly files: number;
    readonly usage: string;
  },
): Arguments {
  const flags = new Set<string>();
  const values = new Map<string, string>();
  const files: string[] = [];
  const fail = (reason: string): never => {
    console.error(`${reason}\nUsage: ${known.usage}`);
    process.exit(2);
  };
  for (let k = 0; k < argv.length; k++) {
    const argument = argv[k]!;
    if (!argument.startsWith('--')) {
      files.push(argument);
      continue;
    }
    const [name, ...rest] = argument.slice(2).split('=');
    if (known.flags?.includes(name!) && rest.length === 0) flags.add(name!);
    else if (known.values?.includes(name!)) {
      const value = rest.length > 0 ? rest.join('=') : argv[++k];
      if (value === undefined) fail(`--${name} needs a value.`);
      values.set(name!, value!);
    } else fail(`Unknown option ${argument}.`);
  }
  if (files.length > known.files) fail(`Unknown argument ${files[known.files]}.`);
  return { flags, values, files };
}
