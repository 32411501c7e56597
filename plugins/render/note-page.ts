/** A solved note to the body of its page: prose by markdown-it, each block replaced by its results. */
import MarkdownIt from 'markdown-it';
import { BLOCK_KINDS } from '../language/fences.ts';
import { VALUE_TOKEN, type ValueTokenMeta, valueDirectivePlugin } from '../language/value-directive.ts';
import type { Problem } from '../problems.ts';
import type { SolvedNote } from '../results.ts';
import { renderAnalysis } from './analysis-summary.ts';
import { renderCircuit } from './circuit-table.ts';
import { renderFigureTable } from './figure-table.ts';
import { escapeHtml, slug } from './html.ts';
import { mathsPlugin } from './maths.ts';
import { quantityText, unitFor } from './number-text.ts';
import { renderPlot } from './plot.ts';
import { problemList, problemPanel } from './problem-panel.ts';

export interface NotePage {
  readonly html: string;
  /** Second-level headings, for the contents. */
  readonly headings: readonly { readonly id: string; readonly text: string }[];
  /** Files beside the page: name and content. */
  readonly files: readonly { readonly name: string; readonly content: string }[];
}

interface RenderEnvironment {
  readonly fences: ReadonlyMap<number, string>;
  readonly values: ReadonlyMap<number, string>;
  readonly firstLine: number;
  readonly headings: { id: string; text: string }[];
  readonly ids: Set<string>;
}

export async function renderNotePage(solved: SolvedNote): Promise<NotePage> {
  const { note } = solved;
  const files: { name: string; content: string }[] = [];
  const fences = new Map<number, string>();
  for (const block of solved.circuits) fences.set(block.line, renderCircuit(block));
  for (const analysis of solved.analyses) fences.set(analysis.block.line, renderAnalysis(analysis));
  for (const table of solved.figureTables) fences.set(table.block.line, renderFigureTable(table));
  for (const plot of solved.plots) {
    const base = slug(`${note.id}-${plot.block.title ?? plot.block.name}`);
    const name = uniqueName(
      base,
      files.map((file) => file.name),
    );
    const rendered = await renderPlot(plot, { id: name, noteId: note.id });
    files.push({ name: `${name}.csv`, content: rendered.csv });
    files.push({ name: `${name}.json`, content: `${JSON.stringify(rendered.spec, null, 2)}\n` });
    fences.set(plot.block.line, plotFigure(rendered, name, note.id, plot.block.title, plot.block.caption));
  }
  addPanels(fences, solved);
  const values = new Map<number, string>();
  for (const { inline, measured } of solved.inlineValues) {
    if (!measured) continue;
    const unit = unitFor(inline.unit, inline.expression.dimension, measured.value);
    values.set(inline.index, escapeHtml(quantityText(measured, unit, inline.digits)));
  }
  const { body, firstLine } = bodyOf(note.text);
  const environment: RenderEnvironment = {
    fences,
    values,
    firstLine,
    headings: [],
    ids: new Set(['problems', 'content']),
  };
  const html = problemList(solved.problems) + createMarkdown().render(body, environment);
  return { html, headings: environment.headings, files };
}

/** The note below its front matter, and the 1-based line that it begins at. */
function bodyOf(text: string): { body: string; firstLine: number } {
  const lines = text.replace(/^\ufeff/, '').split(/\r\n|\n|\r/);
  const mark = /^---[ \t]*$/;
  const closing = mark.test(lines[0] ?? '') ? lines.findIndex((line, k) => k > 0 && mark.test(line)) : -1;
  return { body: lines.slice(closing + 1).join('\n'), firstLine: closing + 2 };
}

/** Problems stand where their block stands; what belongs to no block is in the list at the head. */
function addPanels(fences: Map<number, string>, { note, problems }: SolvedNote): void {
  const tokens = new MarkdownIt({ html: true }).parse(bodyOf(note.text).body, {});
  const offset = bodyOf(note.text).firstLine;
  for (const token of tokens) {
    if (token.type !== 'fence' || !token.map || !isBlock(token.info)) continue;
    const first = offset + token.map[0];
    const last = offset + token.map[1] - 1;
    const own = problems.filter(
      (problem) => problem.file === note.file && problem.line >= first && problem.line <= last,
    );
    if (own.length === 0) continue;
    fences.set(first, own.map(problemPanel).join('') + (fences.get(first) ?? ''));
  }
}

function isBlock(info: string): boolean {
  return (BLOCK_KINDS as readonly string[]).includes(info.trim().split(/\s+/)[0] ?? '');
}

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
  rules.fence = (tokens, index, options, env: RenderEnvironment, self) => {
    const token = tokens[index]!;
    if (!isBlock(token.info) || !token.map) return previousFence(tokens, index, options, env, self);
    return env.fences.get(env.firstLine + token.map[0]) ?? '';
  };
  rules[VALUE_TOKEN] = (tokens, index, _options, env: RenderEnvironment) => {
    const { directive, index: number } = tokens[index]!.meta as ValueTokenMeta;
    const value = env.values.get(number);
    if (value !== undefined)
      return `<data class="value" title="${escapeHtml(directive.expression)}" value="">${value}</data>`.replace(
        ' value=""',
        '',
      );
    return `<mark class="no-value" title="${escapeHtml(directive.expression)}">no value</mark>`;
  };
  rules.heading_open = (tokens, index, options, env: RenderEnvironment, self) => {
    const token = tokens[index]!;
    const text = (tokens[index + 1]?.children ?? []).map(({ content }) => content).join('');
    const id = uniqueName(slug(text), [...env.ids]);
    env.ids.add(id);
    token.attrSet('id', id);
    if (token.tag === 'h2') env.headings.push({ id, text });
    return self.renderToken(tokens, index, options);
  };
  rules.table_open = () => '<div class="table-scroll" role="group" aria-label="Table" tabindex="0"><table>\n';
  rules.table_close = () => '</table></div>\n';
  markdown = parser;
  return parser;
}

function plotFigure(
  plot: {
    readonly svg: string;
    readonly table: { readonly columns: readonly string[]; readonly rows: readonly (readonly string[])[] };
  },
  name: string,
  noteId: string,
  title: string | undefined,
  caption: string | undefined,
): string {
  const folder = encodeURIComponent(noteId);
  const head = plot.table.columns.map((column) => `<th scope="col" class="number">${escapeHtml(column)}</th>`).join('');
  const rows = plot.table.rows
    .map((row) => `<tr>${row.map((cell) => `<td class="number">${escapeHtml(cell)}</td>`).join('')}</tr>`)
    .join('');
  const heading = title === undefined ? '' : `<span class="plot-title">${escapeHtml(title)}.</span> `;
  return (
    `<figure class="plot" id="plot-${name}"><div class="plot-scroll" role="group" aria-label="Plot" tabindex="0">${plot.svg}</div>` +
    `<figcaption><span>${heading}${escapeHtml(caption ?? '')}</span>` +
    `<span class="downloads"><a href="${folder}/${name}.csv" download>Data (CSV)</a> <a href="${folder}/${name}.json" download>Specification (Vega-Lite)</a></span></figcaption>` +
    `<details><summary>Values</summary><div class="table-scroll" role="group" aria-label="Values of the plot" tabindex="0"><table><thead><tr>${head}</tr></thead><tbody>${rows}</tbody></table></div></details></figure>`
  );
}

function uniqueName(base: string, taken: readonly string[]): string {
  const names = new Set(taken.map((name) => name.replace(/\.(csv|json)$/, '')));
  let name = base;
  for (let k = 2; names.has(name); k++) name = `${base}-${k}`;
  return name;
}

/** Problems that stand at no block of the note: the home page counts them all. */
export function countErrors(problems: readonly Problem[]): number {
  return problems.filter(({ severity }) => severity === 'error').length;
}
