/** The files that a note refers to: parts and tables. Each is read once; what is outside is refused. */
import { readdirSync, readFileSync, realpathSync, statSync } from 'node:fs';
import { isAbsolute, join, relative, resolve } from 'node:path';
import type { Problem } from '../problems.ts';
import type { Surroundings } from './components/context.ts';
import { expectedName } from './nearest.ts';
import { type PartFile, readPart } from './parts.ts';
import { report } from './passage.ts';
import type { YamlNode } from './yaml-tree.ts';

/** Largest file that is read, in bytes. */
const LARGEST_FILE = 64 * 1024 * 1024;

export interface Folders {
  /** Absolute; files outside of it and of the note's folder are refused. */
  readonly projectRoot: string;
  readonly noteFolder: string;
  readonly partsFolder: string;
}

/**
 * Reads files for a note. Problems within a part go to `problems` under the part's own path, once for the note;
 * `dependencies` gathers the absolute paths that were read or looked for.
 */
export function surroundingsOf(folders: Folders, problems: Problem[], dependencies: Set<string>): Surroundings {
  const parts = new Map<string, PartFile | undefined>();

  const part = (node: YamlNode, name: string): PartFile | undefined => {
    const path = join(folders.partsFolder, `${name}.yaml`);
    dependencies.add(path);
    const known = parts.has(name);
    if (!known) {
      const text = readIfThere(path);
      if (text === undefined) {
        report(node.passage, node.place, {
          message: `there is no part \`${name}\``,
          expected: expectedPart(name, folders),
        });
        return undefined;
      }
      parts.set(name, readPart(shownPath(path, folders.projectRoot), name, text, problems));
    }
    const found = parts.get(name);
    if (!found && known) report(node.passage, node.place, { message: `the part \`${name}\` could not be read` });
    return found;
  };

  const text = (node: YamlNode, path: string): string | undefined => {
    const complain = (message: string, expected: string) => {
      report(node.passage, node.place, { message, expected, example: 'file: ../measured/ramp.csv' });
      return undefined;
    };
    const full = resolve(folders.noteFolder, path);
    const allowed = [folders.projectRoot, folders.noteFolder];
    if (isAbsolute(path) || path.includes('\0') || !allowed.some((folder) => isWithin(full, folder))) {
      return complain(`\`${path}\` lies outside the project`, 'a path within it, relative to the note');
    }
    dependencies.add(full);
    const content = readIfThere(full);
    if (content === undefined)
      return complain(`there is no file \`${path}\` that can be read`, 'a path relative to the note');
    // A link may point elsewhere.
    const real = realpathSync(full);
    if (!allowed.some((folder) => isWithin(real, realpathSync(folder)))) {
      return complain(`\`${path}\` is a link to a file outside the project`, 'a file within it');
    }
    return content;
  };
  return { part, text };
}

function expectedPart(name: string, folders: Folders): string {
  const names = partNames(folders.partsFolder);
  if (names.length > 0) return expectedName(name, names);
  return `the name of a file in ${shownPath(folders.partsFolder, folders.projectRoot)}, which holds none`;
}

/** A path as messages name it: relative to the project where it lies inside. */
export function shownPath(path: string, projectRoot: string): string {
  return isWithin(path, projectRoot) ? relative(projectRoot, path).replaceAll('\\', '/') : path;
}

export function isWithin(path: string, folder: string): boolean {
  const way = relative(folder, path);
  return way !== '' && !/^\.\.(?:[\\/]|$)/.test(way) && !isAbsolute(way);
}

function readIfThere(path: string): string | undefined {
  try {
    const { size } = statSync(path);
    return size > LARGEST_FILE ? undefined : readFileSync(path, 'utf8');
  } catch {
    return undefined;
  }
}

function partNames(folder: string): string[] {
  try {
    return readdirSync(folder)
      .filter((name) => name.endsWith('.yaml'))
      .map((name) => name.slice(0, -'.yaml'.length))
      .sort();
  } catch {
    return [];
  }
}
