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
