/** All notes of a site, read and solved: what the pages are made from. */
import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { basename, join, relative, sep } from 'node:path';
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
  const { projectRoot, partsFolder } = folders;
  const files = new Map<string, string>();
  for (const file of listNotes(folders.notesFolder)) files.set(basename(file).replace(/\.md$/i, ''), file);
  const reader = createNoteReader({
    projectRoot,
    partsFolder,
    ids: [...files.keys()],
    find: (id) => {
      const file = files.get(id);
      return file === undefined
        ? undefined
        : { file: relative(projectRoot, file).split(sep).join('/'), text: readFileSync(file, 'utf8') };
    },
  });
  last = { notes: [...files.keys()].map((id) => reader.solve(id)!) };
  return last;
}

export interface NoteReader {
  /** The note of this name, read and solved once; nothing where there is none. */
  readonly solve: (id: string) => SolvedNote | undefined;
}

/** Reads and solves notes that may refer to each other's figures; a circle of references leaves the figure without a value. */
export function createNoteReader(options: {
  readonly projectRoot: string;
  readonly partsFolder: string;
  /** Names to suggest where one is unknown. */
  readonly ids: readonly string[];
  readonly find: (id: string) => { readonly file: string; readonly text: string } | undefined;
}): NoteReader {
  const notes = new Map<string, Note | undefined>();
  const reading = new Set<string>();
  const solved = new Map<string, SolvedNote>();
  const solving = new Set<string>();

  const read = (id: string): Note | undefined => {
    if (notes.has(id)) return notes.get(id);
    const found = reading.has(id) ? undefined : options.find(id);
    if (!found) return undefined;
    reading.add(id);
    const { projectRoot, partsFolder } = options;
    const note = readNote(found.text, { file: found.file, projectRoot, partsFolder, otherNotes });
    reading.delete(id);
    notes.set(id, note);
    return note;
  };
  const otherNotes: Pick<CheckContext, 'foreignFigure' | 'notes'> = {
    notes: options.ids,
    foreignFigure: (id, name): FigureInScope | 'unknown note' | 'unknown figure' => {
      const note = read(id);
      if (!note) return 'unknown note';
      for (const block of note.blocks) {
        const figure =
          block.kind === 'figures' ? block.figures.find((candidate) => candidate.name === name) : undefined;
        if (figure) return { kind: figure.expression.kind, dimension: figure.expression.dimension };
      }
      return 'unknown figure';
    },
  };
  const solve = (id: string): SolvedNote | undefined => {
    const known = solved.get(id);
    if (known) return known;
    const note = solving.has(id) ? undefined : read(id);
    if (!note) return undefined;
    solving.add(id);
    const result = solveNote(note, {
      foreignFigure: (other, name) => {
        const tables = solve(other)?.figureTables ?? [];
        return tables.flatMap(({ results }) => results).find(({ figure }) => figure.name === name)?.nominal?.value;
      },
    });
    solving.delete(id);
    solved.set(id, result);
    return result;
  };
  return { solve };
}

function listNotes(folder: string): string[] {
  if (!existsSync(folder)) return [];
  return readdirSync(folder, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile() && /\.md$/i.test(entry.name))
    .map((entry) => join(entry.parentPath, entry.name))
    .sort();
}
