/** All notes of a site, read and solved: what the pages are made from. */
import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { join, relative, sep } from 'node:path';
import type { CheckContext, FigureInScope } from './expressions/context.ts';
import type { Note } from './language/model.ts';
import { readNote } from './language/read-note.ts';
import type { SolvedNote } from './results.ts';
import { solveNote } from './solve-note.ts';

export interface SiteFolders {
  /** Absolute. */
  readonly projectRoot: string;
  readonly notesFolder: string;
  readonly partsFolder: string;
}

export interface SiteModel {
  /** By file name. */
  readonly notes: readonly SolvedNote[];
}

let last: SiteModel | undefined;

/** What the last build of this process was made from. */
export function lastSiteModel(): SiteModel | undefined {
  return last;
}

/** Reads and solves every note below the notes' folder. */
export function buildSiteModel(folders: SiteFolders): SiteModel {
  const files = listNotes(folders.notesFolder);
  const texts = new Map(files.map((file) => [file, readFileSync(file, 'utf8')]));
  const shown = (file: string): string => relative(folders.projectRoot, file).split(sep).join('/');
  const idOf = (file: string): string => relative(folders.notesFolder, file).split(sep).at(-1)!.replace(/\.md$/i, '');
  const ids = files.map(idOf);
  const read = new Map<string, Note>();
  const reading = new Set<string>();
  const solved = new Map<string, SolvedNote>();
  const solving = new Set<string>();

  const readById = (id: string): Note | undefined => {
    const file = files[ids.indexOf(id)];
    if (file === undefined || reading.has(id)) return undefined;
    let note = read.get(id);
    if (!note) {
      reading.add(id);
      note = readNote(texts.get(file)!, {
        file: shown(file),
        projectRoot: folders.projectRoot,
        partsFolder: folders.partsFolder,
        otherNotes,
      });
      reading.delete(id);
      read.set(id, note);
    }
    return note;
  };
  const otherNotes: Pick<CheckContext, 'foreignFigure' | 'notes'> = {
    notes: ids,
    foreignFigure: (id, name): FigureInScope | 'unknown note' | 'unknown figure' => {
      const note = readById(id);
      if (!note) return 'unknown note';
      for (const block of note.blocks) {
        if (block.kind !== 'figures') continue;
        const figure = block.figures.find((candidate) => candidate.name === name);
        if (figure) return { kind: figure.expression.kind, dimension: figure.expression.dimension };
      }
      return 'unknown figure';
    },
  };
  const solveById = (id: string): SolvedNote | undefined => {
    const known = solved.get(id);
    if (known) return known;
    const note = readById(id);
    if (!note || solving.has(id)) return undefined;
    solving.add(id);
    const result = solveNote(note, {
      foreignFigure: (other, name) => {
        const tables = solveById(other)?.figureTables ?? [];
        return tables.flatMap(({ results }) => results).find(({ figure }) => figure.name === name)?.nominal?.value;
      },
    });
    solving.delete(id);
    solved.set(id, result);
    return result;
  };
  const notes = ids.map((id) => solveById(id)!);
  last = { notes };
  return last;
}

function listNotes(folder: string): string[] {
  if (!existsSync(folder)) return [];
  return readdirSync(folder, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile() && /\.md$/i.test(entry.name))
    .map((entry) => join(entry.parentPath, entry.name))
    .sort();
}
