/** The prose of a note: CommonMark by markdown-it, with computed values, maths, and each block replaced by its result. */
import MarkdownIt, { type Token } from 'markdown-it';
import { BLOCK_KINDS } from '../language/fences.ts';
import { VALUE_TOKEN, type ValueTokenMeta, valueDirectivePlugin } from '../language/value-directive.ts';
import { escapeHtml, slug } from './html.ts';
import { mathsPlugin } from './maths.ts';
import { uniqueName } from './names.ts';

export interface ProseResults {
  /** HTML that stands in place of a block, by the line of the note's file that its fence is on. */
  readonly fences: ReadonlyMap<number, string>;
  /** Computed values as text, by their number in the note. */
  readonly values: ReadonlyMap<number, string>;
  /** Line of the note's file that the body begins at. */
  readonly firstLine: number;
}

export interface Heading {
  readonly id: string;
  readonly text: string;
}

interface Environment extends ProseResults {
  readonly headings: Heading[];
  readonly ids: Set<string>;
}

/** The body as HTML, and its second-level headings. */
export function renderProse(body: string, results: ProseResults): { html: string; headings: readonly Heading[] } {
  const environment: Environment = { ...results, headings: [], ids: new Set(['problems', 'content']) };
  return { html: createMarkdown().render(body, environment), headings: environment.headings };
}

export function isBlock(info: string): boolean {
  return (BLOCK_KINDS as readonly string[]).includes(info.trim().split(/\s+/)[0] ?? '');
}

/** Stands where a block has no result because something that it needs has a problem. */
const NO_RESULT = '<p class="no-result">Nothing to show here: a block that this one needs has a problem.</p>\n';

/** A link to another note's file; its page stands beside this one's. */
const NOTE_FILE = /^([^:?#]+)\.md(#.*)?$/i;

let markdown: MarkdownIt | undefined;

function createMarkdown(): MarkdownIt {
  if (markdown) return markdown;
  // `html` is on so that the parser sees the same tokens as the reader of notes does; what it finds is shown as text
  const parser = new MarkdownIt({ html: true, linkify: false, typographer: false });
  parser.use(valueDirectivePlugin);
  parser.use(mathsPlugin);
  const { rules } = parser.renderer;
  const previousFence = rules.fence!;
  rules.html_block = (tokens, index) => `<p>${escapeHtml(tokens[index]!.content)}</p>`;
  rules.html_inline = (tokens, index) => escapeHtml(tokens[index]!.content);
  rules.fence = (tokens, index, options, env: Environment, self) => {
    const token = tokens[index]!;
    if (!isBlock(token.info) || !token.map) return previousFence(tokens, index, options, env, self);
    return env.fences.get(env.firstLine + token.map[0]) ?? NO_RESULT;
  };
  rules[VALUE_TOKEN] = (tokens, index, _options, env: Environment) => {
    const { directive, index: number } = tokens[index]!.meta as ValueTokenMeta;
    const value = env.values.get(number);
    const title = `title="${escapeHtml(directive.expression)}"`;
    if (value !== undefined) return `<span class="value" ${title}>${escapeHtml(value)}</span>`;
    return `<mark class="no-value" ${title}>no value</mark>`;
  };
  rules.heading_open = (tokens, index, options, env: Environment, self) => {
    const token = tokens[index]!;
    const text = (tokens[index + 1]?.children ?? []).map((child) => plainText(child, env)).join('');
    const id = uniqueName(slug(text), env.ids);
    env.ids.add(id);
    token.attrSet('id', id);
    if (token.tag === 'h2') env.headings.push({ id, text });
    return self.renderToken(tokens, index, options);
  };
  rules.link_open = (tokens, index, options, _env, self) => {
    const token = tokens[index]!;
    const target = token.attrGet('href');
    if (target !== null) token.attrSet('href', target.replace(NOTE_FILE, '$1.html$2'));
    return self.renderToken(tokens, index, options);
  };
  rules.table_open = () => '<div class="table-scroll" role="group" aria-label="Table" tabindex="0"><table>\n';
  rules.table_close = () => '</table></div>\n';
  markdown = parser;
  return parser;
}

/** What a part of a heading says, for the contents and its id. */
function plainText(token: Token, { values }: Environment): string {
  if (token.type === VALUE_TOKEN) return values.get((token.meta as ValueTokenMeta).index) ?? '';
  if (token.type === 'softbreak' || token.type === 'hardbreak') return ' ';
  return token.content;
}
