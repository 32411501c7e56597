/** A solved note to the body of its page: prose by markdown-it, each block replaced by its results. */
import MarkdownIt from 'markdown-it';
import type { Note } from '../language/model.ts';
import { type Problem, sortProblems } from '../problems.ts';
import type { SolvedNote } from '../results.ts';
import { renderAnalysis } from './analysis-summary.ts';
import { renderCircuit } from './circuit-table.ts';
import { renderFigureTable } from './figure-table.ts';
import { slug } from './html.ts';
import { uniqueName } from './names.ts';
import { quantityText, unitFor } from './number-text.ts';
import { renderPlotFigure } from './plot-figure.ts';
import { problemList, problemPanel } from './problem-panel.ts';
import { type Heading, isBlock, renderProse } from './prose.ts';

export interface NotePage {
  readonly html: string;
  /** Second-level headings, for the contents. */
  readonly headings: readonly Heading[];
  /** What drawing found wrong; the note's own problems are not repeated. */
  readonly problems: readonly Problem[];
  /** Files beside the page: name and content. */
  readonly files: readonly { readonly name: string; readonly content: string }[];
}

export async function renderNotePage(solved: SolvedNote): Promise<NotePage> {
  const { note } = solved;
  const files: { name: string; content: string }[] = [];
  const problems: Problem[] = [];
  const fences = new Map<number, string>();
  for (const block of solved.circuits) fences.set(block.line, renderCircuit(block));
  for (const analysis of solved.analyses) fences.set(analysis.block.line, renderAnalysis(analysis));
  for (const table of solved.figureTables) fences.set(table.block.line, renderFigureTable(table));
  const names = new Set<string>();
  for (const plot of solved.plots) {
    const name = uniqueName(slug(`${note.id}-${plot.block.title ?? plot.block.name}`), names);
    names.add(name);
    const figure = await renderPlotFigure(plot, name, note);
    problems.push(...figure.problems);
    files.push(...figure.files);
    if (figure.html !== undefined) fences.set(plot.block.line, figure.html);
  }
  const all = sortProblems([...solved.problems, ...problems], note.file);
  const listed = addPanels(fences, note, all);
  const values = new Map<number, string>();
  for (const { inline, measured } of solved.inlineValues) {
    if (!measured) continue;
    const unit = unitFor(inline.unit, inline.expression.dimension, measured.value);
    values.set(inline.index, quantityText(measured, unit, inline.digits));
  }
  const { body, firstLine } = bodyOf(note.text);
  const prose = renderProse(body, { fences, values, firstLine });
  return { html: problemList(listed) + prose.html, headings: prose.headings, problems, files };
}

/** The note below its front matter, and the 1-based line that it begins at. */
function bodyOf(text: string): { body: string; firstLine: number } {
  const lines = text.replace(/^\ufeff/, '').split(/\r\n|\n|\r/);
  const mark = /^---[ \t]*$/;
  const closing = mark.test(lines[0] ?? '') ? lines.findIndex((line, k) => k > 0 && mark.test(line)) : -1;
  return { body: lines.slice(closing + 1).join('\n'), firstLine: closing + 2 };
}

/** Problems stand where their block stands; what belongs to no block is in the list at the head. */
function addPanels(
  fences: Map<number, string>,
  note: Note,
  problems: readonly Problem[],
): { readonly problem: Problem; readonly id?: string }[] {
  const { body, firstLine } = bodyOf(note.text);
  const tokens = new MarkdownIt({ html: true }).parse(body, {});
  const ids = new Map<Problem, string>();
  for (const token of tokens) {
    if (token.type !== 'fence' || !token.map || !isBlock(token.info)) continue;
    const first = firstLine + token.map[0];
    const last = firstLine + token.map[1] - 1;
    const own = problems.filter(
      (problem) => problem.file === note.file && problem.line >= first && problem.line <= last,
    );
    for (const problem of own) ids.set(problem, `problem_${problems.indexOf(problem) + 1}`);
    const panels = own.map((problem) => problemPanel(problem, ids.get(problem)));
    if (panels.length > 0) fences.set(first, panels.join('') + (fences.get(first) ?? ''));
  }
  return problems.map((problem) => ({ problem, ...(ids.has(problem) ? { id: ids.get(problem)! } : {}) }));
}
