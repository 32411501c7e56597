/** One note, wherever its file lies, read and solved. */
import { existsSync, readFileSync, statSync } from 'node:fs';
import { basename, dirname, isAbsolute, join, relative, sep } from 'node:path';
import type { SolvedNote } from '../results.ts';
import { createNoteReader } from '../site-model.ts';
import { fromCaller, PROJECT_ROOT, reasonOf } from './project.ts';

export interface NoteFile {
  /** Absolute. */
  readonly path: string;
  readonly text: string;
}

/** The note's text, or why there is none. */
export function readNoteFile(asked: string): NoteFile | { readonly message: string; readonly hint: string } {
  const path = fromCaller(asked);
  try {
    const stat = statSync(path, { throwIfNoEntry: false });
    if (!stat) return { message: 'there is no such file', hint: 'the path of a note, a Markdown file' };
    if (stat.isDirectory()) return { message: 'this is a folder', hint: 'the path of a note, a Markdown file' };
    if (!stat.isFile()) return { message: 'this is no regular file', hint: 'the path of a note, a Markdown file' };
    return { path, text: decode(readFileSync(path)) };
  } catch (error) {
    if (error instanceof TypeError) return { message: 'this is no text in UTF-8', hint: 'a note saved as UTF-8' };
    return { message: `this cannot be read: ${reasonOf(error)}`, hint: 'a file that you may read' };
  }
}

/** Throws a `TypeError` where the bytes are no text. */
function decode(bytes: Buffer): string {
  const text = new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  if (text.includes('\0')) throw new TypeError('binary');
  return text;
}

/** Solves the note; other notes that it refers to are looked for beside it, then among the project's. */
export function solveFile({ path, text }: NoteFile): SolvedNote {
  const id = nameOf(path);
  const folders = [dirname(path), join(PROJECT_ROOT, 'content/notes')];
  const reader = createNoteReader({
    projectRoot: PROJECT_ROOT,
    partsFolder: join(PROJECT_ROOT, 'content/parts'),
    find: (other) => {
      if (other === id) return { file: shown(path), text };
      if (/[/\\]/.test(other)) return undefined;
      const found = folders.map((folder) => join(folder, `${other}.md`)).find(existsSync);
      return found === undefined ? undefined : { file: shown(found), text: readFileSync(found, 'utf8') };
    },
    ids: [],
  });
  return reader.solve(id)!;
}

function nameOf(path: string): string {
  return basename(path).replace(/\.md$/i, '');
}

/** A path as messages name it: from the project's root where it lies inside. */
function shown(path: string): string {
  const inside = relative(PROJECT_ROOT, path);
  return inside.startsWith('..') || isAbsolute(inside) ? path : inside.split(sep).join('/');
}
