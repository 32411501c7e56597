/** An author's mistake as data; words are put to it in one place, so every message has the same shape. */
export interface Problem {
  /** Path as the author knows it, relative to the project where it lies inside. */
  readonly file: string;
  /** 1-based, counted in the whole file, front matter included. */
  readonly line: number;
  /** 1-based, in characters. */
  readonly column: number;
  /** Characters that the caret underlines; at least 1. */
  readonly length: number;
  /** The source line, without its line end. */
  readonly sourceLine: string;
  /** What was found and what is wrong with it, one sentence. */
  readonly message: string;
  /** What is expected instead, a nearest valid name included where there is one. */
  readonly expected?: string;
  /** One line that is right. */
  readonly example?: string;
  readonly severity: 'error' | 'warning';
}

/** The words of a problem, before its place is known. */
export interface Words {
  readonly message: string;
  readonly expected?: string;
  readonly example?: string;
  readonly severity?: 'error' | 'warning';
}

/** A file as messages quote it. */
export interface FileText {
  /** Path as messages name it. */
  readonly file: string;
  /** Without line ends. */
  readonly lines: readonly string[];
}

/** Splits a file's text into lines; every kind of line end is understood, a byte order mark is dropped. */
export function fileText(file: string, text: string): FileText {
  return { file, lines: text.replace(/^\ufeff/, '').split(/\r\n|\n|\r/) };
}

/** A problem at a place of a file; the place is brought within the text, so that a caret can always be drawn. */
export function problemAt(
  text: FileText,
  place: { readonly line: number; readonly column: number; readonly length: number },
  words: Words,
): Problem {
  const line = Math.max(1, Math.min(place.line, text.lines.length));
  const sourceLine = text.lines[line - 1] ?? '';
  const column = Math.max(1, Math.min(place.column, sourceLine.length + 1));
  const length = Math.max(1, Math.min(place.length, sourceLine.length + 1 - column));
  return {
    file: text.file,
    line,
    column,
    length,
    sourceLine,
    message: shorten(words.message),
    ...(words.expected === undefined ? {} : { expected: shorten(words.expected) }),
    ...(words.example === undefined ? {} : { example: words.example }),
    severity: words.severity ?? 'error',
  };
}

/** Cuts what is quoted from the author where it is long; the source line shows it whole. */
function shorten(text: string): string {
  return text.replace(/`([^`]{101,})`/g, (_, quoted: string) => `\`${quoted.slice(0, 80)}…\``);
}

/**
 * A problem as a terminal shows it:
 *
 *     content/notes/lamp.md:12:18: error: a resistance (Ω) is due, `5 V` is a voltage
 *       R1: { resistor: 5 V, nodes: [line, a] }
 *                       ^^^
 *       expected: a resistance (Ω)
 *       example: R1: { resistor: 47 Ω, nodes: [a, gnd] }
 */
export function formatProblem(problem: Problem): string {
  const { file, line, column, length, sourceLine, message, expected, example, severity } = problem;
  // Tabs are kept under the line, so that the caret stands where the terminal puts the text.
  const indent = sourceLine.slice(0, column - 1).replace(/[^\t]/g, ' ');
  const text = [
    `${file}:${line}:${column}: ${severity}: ${message}`,
    `  ${sourceLine}`,
    `  ${indent}${'^'.repeat(length)}`,
  ];
  if (expected !== undefined) text.push(`  expected: ${expected}`);
  if (example !== undefined) text.push(`  example: ${example}`);
  return text.join('\n');
}

/**
 * Those of `file` first (default: of the file that comes first in the list), by line, then column; then other files by
 * name. Problems of one place stay in their order.
 */
export function sortProblems(problems: readonly Problem[], file = problems[0]?.file): Problem[] {
  const rank = (problem: Problem) => (problem.file === file ? '' : problem.file);
  return [...problems].sort((left, right) => {
    if (rank(left) !== rank(right)) return rank(left) < rank(right) ? -1 : 1;
    return left.line - right.line || left.column - right.column;
  });
}
