/** All notes of a site, read and solved: what the pages are made from. */
import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { basename, join, relative, sep } from 'node:path';
import type { CheckContext, FigureInScope } from './expressions/context.ts';
import type { Note } from './language/model.ts';
import { readNote } from './language/read-note.ts';
import { fileText, type Problem, problemAt } from './problems.ts';
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

/** Reads and solves every note of the notes' folder. */
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
  return { notes: [...files.keys()].map((id) => reader.solve(id)!) };
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
    const note = orBroken(found, () =>
      readNote(found.text, { file: found.file, projectRoot, partsFolder, otherNotes }),
    );
    reading.delete(id);
    notes.set(id, note);
    return note;
  };
  const otherNotes: Pick<CheckContext, 'foreignFigure' | 'notes'> = {
    notes: options.ids,
    foreignFigure: (id, name): FigureInScope | 'unknown note' | 'unknown figure' | 'circle' => {
      if (reading.has(id)) return 'circle';
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
    const foreignFigure = (other: string, name: string): number | undefined => {
      const tables = solve(other)?.figureTables ?? [];
      return tables.flatMap(({ results }) => results).find(({ figure }) => figure.name === name)?.nominal?.value;
    };
    const result = orUnsolved(note, () => solveNote(note, { foreignFigure }));
    solving.delete(id);
    solved.set(id, result);
    return result;
  };
  return { solve };
}

/** A fault of this program in one note leaves the others as they are. */
function orBroken({ file, text }: { readonly file: string; readonly text: string }, read: () => Note): Note {
  try {
    return read();
  } catch (error) {
    return {
      file,
      id: basename(file).replace(/\.md$/i, ''),
      text,
      titleBlock: { title: basename(file), status: 'draft', reviewers: [] },
      blocks: [],
      inlineValues: [],
      problems: [internalProblem(file, text, error)],
      dependencies: [],
    };
  }
}

function orUnsolved(note: Note, solve: () => SolvedNote): SolvedNote {
  try {
    return solve();
  } catch (error) {
    const problems = [...note.problems, internalProblem(note.file, note.text, error)];
    return { note, problems, circuits: [], analyses: [], figureTables: [], plots: [], inlineValues: [] };
  }
}

function internalProblem(file: string, text: string, error: unknown): Problem {
  const reason = (error instanceof Error ? error.message : String(error)).replace(/^Internal error: /, '');
  const place = { line: 1, column: 1, length: 1 };
  return problemAt(fileText(file, text), place, { message: `Internal error: this note cannot be solved: ${reason}` });
}

function listNotes(folder: string): string[] {
  if (!existsSync(folder)) return [];
  return readdirSync(folder, { withFileTypes: true })
    .filter((entry) => !entry.isDirectory() && /\.md$/i.test(entry.name))
    .map((entry) => join(folder, entry.name))
    .sort();
}
