/** A reference problem entered as a note, and what a reader of the note is given for it. */
import { readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { readNote } from '../../plugins/language/read-note.ts';
import type { Measured } from '../../plugins/results.ts';
import { solveNote } from '../../plugins/solve-note.ts';

export interface NoteCase {
  readonly name: string;
  /** Lines `DESIGNATOR: { ... }` of the circuit block. */
  readonly components: readonly string[];
  /** Body of the analysis block, without `accuracy`. */
  readonly analysis: string;
  /** By name: the expression, its reference value, and how far (absolute) it may be from it besides the accuracy asked of the scale. */
  readonly figures: {
    readonly [name: string]: { readonly is: string; readonly reference: number; readonly scale?: number };
  };
  /** Accuracy of the reference itself, relative; default 1e-11. */
  readonly known?: number;
}

export interface Comparison {
  readonly problem: string;
  readonly figure: string;
  readonly reference: number;
  readonly found: Measured;
  /** Of the reference's magnitude, or of the scale stated. */
  readonly relativeError: number;
  readonly known: number;
}

/** Reads and solves the note at the accuracy asked; problems are an error, in words. */
export function compareNote(problem: NoteCase, accuracy: number): Comparison[] {
  const figures = Object.entries(problem.figures).map(([name, { is }]) => `${name}: ${JSON.stringify(is)}`);
  const text = [
    `# ${problem.name}`,
    '```circuit c',
    'components:',
    ...problem.components.map((line) => `  ${line}`),
    '```',
    '```analysis a',
    problem.analysis,
    `accuracy: ${accuracy}`,
    '```',
    '```figures f',
    ...figures,
    '```',
  ].join('\n');
  const note = readNote(text, { file: `${problem.name}.md`, projectRoot: resolve('.') });
  const solved = solveNote(note);
  const errors = solved.problems.filter(({ severity }) => severity === 'error');
  if (errors.length > 0)
    throw new Error(`${problem.name}: ${errors.map(({ line, message }) => `${line}: ${message}`).join('; ')}`);
  return solved.figureTables[0]!.results.map(({ figure, nominal }) => {
    const { reference, scale } = problem.figures[figure.name]!;
    return {
      problem: problem.name,
      figure: figure.name,
      reference,
      found: nominal!,
      relativeError: Math.abs(nominal!.value - reference) / (scale ?? Math.abs(reference)),
      known: problem.known ?? 1e-11,
    };
  });
}

export function reference(name: string): never {
  return JSON.parse(readFileSync(new URL(`${name}.json`, import.meta.url), 'utf8')) as never;
}
