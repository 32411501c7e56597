/** The demonstration notes, read and solved once for the tests that look at them. */
import { readdirSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { readNote } from '../../plugins/language/read-note.ts';
import type { SolvedNote } from '../../plugins/results.ts';
import { solveNote } from '../../plugins/solve-note.ts';

export const projectRoot = fileURLToPath(new URL('../../', import.meta.url));

export const noteFiles = readdirSync(`${projectRoot}/content/notes`).filter((name) => name.endsWith('.md'));

const solved = new Map<string, SolvedNote>();

/** By the name of the note's file without its ending. */
export function solvedNote(id: string): SolvedNote {
  let result = solved.get(id);
  if (!result) {
    const file = `content/notes/${id}.md`;
    result = solveNote(readNote(readFileSync(`${projectRoot}/${file}`, 'utf8'), { file, projectRoot }));
    solved.set(id, result);
  }
  return result;
}

/** The nominal value of a figure, in SI. */
export function figureOf(id: string, name: string): number {
  const results = solvedNote(id).figureTables.flatMap((table) => table.results);
  const value = results.find(({ figure }) => figure.name === name)?.nominal?.value;
  if (value === undefined) throw new Error(`no value of ${id}#${name}`);
  return value;
}
