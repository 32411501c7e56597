/** A note's text taken apart: front matter, the fenced blocks of the model, and the computed values in the prose. */

import type { Token } from 'markdown-it';
import MarkdownIt from 'markdown-it';
import type { FileText, Problem, Words } from '../problems.ts';
import { problemAt } from '../problems.ts';
import type { Place } from './model.ts';
import { list, nearest } from './nearest.ts';
import { type Passage, passageOf } from './passage.ts';
import {
  metaOf,
  readValueDirective,
  VALUE_TOKEN,
  type ValueDirective,
  valueDirectivePlugin,
} from './value-directive.ts';

export const BLOCK_KINDS = ['circuit', 'analysis', 'plot', 'figures', 'measured', 'sizing'] as const;
export type BlockKind = (typeof BLOCK_KINDS)[number];

export interface Fence {
  readonly kind: BlockKind;
  readonly name: string;
  /** 1-based line of the opening fence. */
  readonly line: number;
  /** 1-based line of the closing fence, or the last line where it is missing. */
  readonly endLine: number;
  readonly body: Passage;
  /** The name where it is written, or the kind. */
  readonly namePlace: Place;
}

export interface InlineDirective {
  readonly index: number;
  readonly directive: ValueDirective;
  /** The expression, as a passage of the file. */
  readonly expression: Passage;
  readonly place: Place;
}

export interface NoteParts {
  readonly frontMatter?: Passage;
  readonly fences: readonly Fence[];
  readonly directives: readonly InlineDirective[];
  /** Text of the first heading. */
  readonly heading?: string;
}

const NAME = /^[A-Za-z_][A-Za-z0-9_-]*$/;

const markdown = new MarkdownIt({ html: true });
markdown.use(valueDirectivePlugin);

/** Takes a note apart; problems of the parts' outer form are added to `problems`. */
export function takeApart(file: FileText, problems: Problem[]): NoteParts {
  const bodyStart = frontMatterEnd(file, problems);
  const frontMatter =
    bodyStart === 0 ? undefined : passageOf(file, file.lines.slice(1, bodyStart - 1).join('\n'), 2, problems);
  const tokens = markdown.parse(file.lines.slice(bodyStart).join('\n'), {});

  const fences: Fence[] = [];
  const directives: InlineDirective[] = [];
  /** First column of each line not yet taken by an inline text: cells of a table share a line. */
  const taken = new Map<number, number>();
  let map: [number, number] = [0, 0];
  let heading: string | undefined;
  for (const [position, token] of tokens.entries()) {
    if (token.map) map = token.map;
    if (token.type === 'fence') {
      const fence = readFence(file, problems, token, bodyStart);
      if (fence) fences.push(fence);
    } else if (token.type === 'inline') {
      if (heading === undefined && tokens[position - 1]?.type === 'heading_open') heading = token.content;
      directives.push(...readInline(file, problems, token, bodyStart + map[0], taken));
    }
  }
  return { ...(frontMatter ? { frontMatter } : {}), fences, directives, ...(heading ? { heading } : {}) };
}

/** Number of lines that the front matter takes, its marks included; 0 if there is none. */
function frontMatterEnd(file: FileText, problems: Problem[]): number {
  if (!/^---[ \t]*$/.test(file.lines[0] ?? '')) return 0;
  const closing = file.lines.findIndex((line, index) => index > 0 && /^---[ \t]*$/.test(line));
  if (closing !== -1) return closing + 1;
  problems.push(
    problemAt(
      file,
      { line: 1, column: 1, length: 3 },
      {
        message: 'the front matter opens here and is not closed',
        expected: 'a line `---` after its last key',
      },
    ),
  );
  return 0;
}

function readFence(file: FileText, problems: Problem[], token: Token, bodyStart: number): Fence | undefined {
  const [word = '', ...names] = token.info.trim().split(/\s+/);
  const [start, end] = token.map!;
  const line = bodyStart + start + 1;
  const opening = file.lines[line - 1] ?? '';
  const placeOfWord = (text: string): Place => {
    const column = opening.lastIndexOf(text) + 1;
    return { line, column: Math.max(1, column), length: Math.max(1, text.length) };
  };
  const problem = (place: Place, words: Words) => problems.push(problemAt(file, place, words));

  const kind = BLOCK_KINDS.find((known) => known === word);
  if (!kind) {
    const meant = word.length > 3 ? nearest(word, BLOCK_KINDS) : undefined;
    if (meant) {
      problem(placeOfWord(word), {
        message: `\`${word}\` is not a kind of block`,
        expected: `\`${meant}\` is the nearest of ${list(BLOCK_KINDS)}`,
        severity: 'warning',
      });
    }
    return undefined;
  }
  const closed =
    (file.lines[bodyStart + end - 1] ?? '').replace(/^[\s>]*/, '').startsWith(token.markup) && end > start + 1;
  if (!closed) {
    problem(placeOfWord(word), {
      message: `the block \`${word}\` opens here and is not closed`,
      expected: `a line \`${token.markup}\` after its last line`,
    });
  }
  const name = names[0] ?? kind;
  const namePlace = placeOfWord(name);
  if (names.length > 1) {
    problem(placeOfWord(names.at(-1)!), {
      message: `\`${names.join(' ')}\` is more than one word`,
      expected: 'one name after the kind of block',
      example: `${token.markup}${kind} ${names.join('-')}`,
    });
  } else if (kind === 'analysis' && NAME.test(name) && name.includes('-')) {
    // Expressions read from an analysis by its name, and there a hyphen is a minus.
    problem(namePlace, {
      message: `\`${name}\` cannot be an analysis's name: in \`x @ ${name}\` the hyphen is a minus`,
      expected: 'letters, digits and `_`',
      example: `${token.markup}analysis ${name.replaceAll('-', '_')}`,
    });
  } else if (!NAME.test(name)) {
    problem(namePlace, {
      message: `\`${name}\` cannot be a block's name`,
      expected: 'letters, digits, `-` and `_`, beginning with a letter',
      example: `${token.markup}${kind} steady`,
    });
  }
  const body = passageOf(file, token.content.replace(/\n$/, ''), line + 1, problems);
  return { kind, name, line, endLine: bodyStart + end, body, namePlace };
}

function readInline(
  file: FileText,
  problems: Problem[],
  token: Token,
  firstLine: number,
  taken: Map<number, number>,
): InlineDirective[] {
  const contentLines = token.content.split('\n');
  // Where each line of the content begins in its file line; cells of a table are found one after the other.
  const columns = contentLines.map((text, index) => {
    const line = firstLine + index;
    const from = taken.get(line) ?? 0;
    const whole = file.lines[line] ?? '';
    const found = whole.indexOf(text, from);
    if (found !== -1) taken.set(line, found + text.length);
    return found;
  });
  const lineStarts = [0];
  for (const text of contentLines) lineStarts.push(lineStarts.at(-1)! + text.length + 1);

  /** 1-based line and column of an offset in the content. */
  const locate = (offset: number, text: string): { line: number; column: number } => {
    let index = 0;
    while (index + 1 < contentLines.length && lineStarts[index + 1]! <= offset) index++;
    const base = columns[index]!;
    const whole = file.lines[firstLine + index] ?? '';
    const column = base === -1 ? Math.max(0, whole.indexOf(text)) : base + offset - lineStarts[index]!;
    return { line: firstLine + index + 1, column: column + 1 };
  };

  const directives: InlineDirective[] = [];
  for (const child of token.children ?? []) {
    if (child.type === 'text') reportUnclosed(file, problems, token, child, locate);
    if (child.type !== VALUE_TOKEN) continue;
    const { directive, index } = metaOf(child);
    const start = locate(directive.start, child.content);
    const inner = locate(directive.expressionStart, directive.expression);
    for (const fault of directive.faults) {
      const at = locate(fault.start, token.content.slice(fault.start, fault.end));
      problems.push(problemAt(file, { ...at, length: fault.end - fault.start }, fault));
    }
    directives.push({
      index,
      directive,
      expression: passageOf(file, directive.expression, inner.line, problems, inner.column),
      place: { ...start, length: directive.end - directive.start },
    });
  }
  return directives;
}

/** A `:val[` that was left as text because its bracket is not closed. */
function reportUnclosed(
  file: FileText,
  problems: Problem[],
  token: Token,
  child: Token,
  locate: (offset: number, text: string) => { line: number; column: number },
): void {
  if (!child.content.includes(':val[')) return;
  const offset = token.content.indexOf(child.content.slice(child.content.indexOf(':val[')));
  if (offset === -1 || readValueDirective(token.content, offset)) return;
  problems.push(
    problemAt(
      file,
      { ...locate(offset, ':val['), length: 5 },
      {
        message: '`:val[` opens a computed value that is not closed',
        expected: 'a `]` after the expression',
        example: ':val[mean(D1.i)]{in=mA digits=3}',
      },
    ),
  );
}
