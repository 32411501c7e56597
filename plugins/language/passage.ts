/**
 * A passage of a file that is read on its own (the YAML of a block, a directive, the front matter) and the way back to
 * the file's lines and columns. Problems are collected here while the passage is read.
 */
import { type FileText, type Problem, problemAt, type Words } from '../problems.ts';
import type { Place } from './model.ts';

export interface Passage {
  readonly file: FileText;
  /** With `\n` at line ends, and without the indentation or quote marks of a list or a quote around it. */
  readonly text: string;
  /** 1-based line of the file in which the text begins. */
  readonly firstLine: number;
  /** Characters of the file's line that come before the passage's, for each of its lines. */
  readonly shifts: readonly number[];
  /** Offsets of the lines' first characters. */
  readonly lineStarts: readonly number[];
  /** Where problems of this file go. */
  readonly problems: Problem[];
}

/** The passage whose first line is `firstLine` of the file; its lines are ends of the file's lines. */
export function passageOf(
  file: FileText,
  text: string,
  firstLine: number,
  problems: Problem[],
  firstColumn = 1,
): Passage {
  const lineStarts = [0];
  for (let at = text.indexOf('\n'); at !== -1; at = text.indexOf('\n', at + 1)) lineStarts.push(at + 1);
  const shifts = text.split('\n').map((line, index) => {
    if (index === 0 && firstColumn > 1) return firstColumn - 1;
    const whole = file.lines[firstLine - 1 + index] ?? '';
    return whole.endsWith(line) ? whole.length - line.length : Math.max(0, whole.indexOf(line));
  });
  return { file, text, firstLine, shifts, lineStarts, problems };
}

/** The whole of a file. */
export function wholeFile(file: FileText, problems: Problem[]): Passage {
  return passageOf(file, file.lines.join('\n'), 1, problems);
}

/** Where the characters from `start` to `end` of the passage stand; a range over several lines is cut at its first. */
export function placeOf(passage: Passage, start: number, end: number): Place {
  const from = Math.max(0, Math.min(start, passage.text.length));
  let line = lineAt(passage.lineStarts, from);
  // The end of the text after its last line end belongs to the line before, where there is something to point at.
  if (line > 0 && from === passage.text.length && from === passage.lineStarts[line]) line--;
  const lineStart = passage.lineStarts[line]!;
  const lineEnd = (passage.lineStarts[line + 1] ?? passage.text.length + 1) - 1;
  const column = Math.min(from, lineEnd) - lineStart;
  const length = Math.max(1, Math.min(end, lineEnd) - lineStart - column);
  return { line: passage.firstLine + line, column: 1 + column + (passage.shifts[line] ?? 0), length };
}

/** Adds a problem of the passage's file. */
export function report(passage: Passage, place: Place, words: Words): void {
  passage.problems.push(problemAt(passage.file, place, words));
}

function lineAt(lineStarts: readonly number[], offset: number): number {
  let low = 0;
  let high = lineStarts.length - 1;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (lineStarts[middle]! <= offset) low = middle;
    else high = middle - 1;
  }
  return low;
}
