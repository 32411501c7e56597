/** A plot as a figure of the page: the drawing, its caption, its files, its values as a table; or what is wrong with it. */
import type { Note } from '../language/model.ts';
import { fileText, type Problem, problemAt } from '../problems.ts';
import type { SolvedPlot } from '../results.ts';
import { escapeHtml } from './html.ts';
import { type RenderedPlot, renderPlot } from './plot.ts';

export interface PlotFigure {
  /** Missing where the plot cannot be drawn. */
  readonly html?: string;
  readonly files: readonly { readonly name: string; readonly content: string }[];
  readonly problems: readonly Problem[];
}

/** `name`: of the files beside the page, unique in the note. */
export async function renderPlotFigure(plot: SolvedPlot, name: string, note: Note): Promise<PlotFigure> {
  const place = vegaPlace(plot, note);
  const text = fileText(note.file, note.text);
  try {
    const rendered = await renderPlot(plot, { id: `plot_${name}` });
    return {
      html: figureHtml(plot, rendered, name, note.id),
      files: [
        { name: `${name}.csv`, content: rendered.csv },
        { name: `${name}.json`, content: `${JSON.stringify(rendered.spec, null, 2)}\n` },
      ],
      problems: rendered.warnings.map((warning) =>
        problemAt(text, place, { message: `the plot was drawn with a warning: ${warning}`, severity: 'warning' }),
      ),
    };
  } catch (error) {
    const reason = error instanceof Error ? error.message : String(error);
    const words = plot.block.vega
      ? {
          message: `the plot cannot be drawn with these properties: ${reason}`,
          expected: 'properties that Vega-Lite accepts',
        }
      : { message: `Internal error: the plot cannot be drawn: ${reason}` };
    return { files: [], problems: [problemAt(text, place, words)] };
  }
}

/** The block's `vega:`, where it has one, else its fence. */
function vegaPlace({ block }: SolvedPlot, note: Note): { line: number; column: number; length: number } {
  const { lines } = fileText(note.file, note.text);
  const found = lines.slice(block.line, block.endLine - 1).findIndex((line) => /^\s*vega\s*:/.test(line));
  const line = found < 0 ? block.line : block.line + 1 + found;
  const source = lines[line - 1] ?? '';
  return { line, column: source.length - source.trimStart().length + 1, length: Math.max(1, source.trim().length) };
}

function figureHtml({ block }: SolvedPlot, { svg, table }: RenderedPlot, name: string, noteId: string): string {
  const folder = encodeURIComponent(noteId);
  const title = block.title === undefined ? 'Plot' : escapeHtml(block.title);
  const head = table.columns.map((column) => `<th scope="col" class="number">${escapeHtml(column)}</th>`).join('');
  const rows = table.rows.map(
    ([first, ...others]) =>
      `<tr><th scope="row" class="number">${escapeHtml(first ?? '')}</th>${others.map((cell) => `<td class="number">${escapeHtml(cell)}</td>`).join('')}</tr>`,
  );
  const heading = block.title === undefined ? '' : `<span class="plot-title">${title}.</span> `;
  return (
    `<figure class="plot" id="figure_${name}"><div class="plot-scroll" role="group" aria-label="${title}, drawing" tabindex="0">${svg}</div>` +
    `<figcaption><span>${heading}${escapeHtml(block.caption ?? '')}</span>` +
    `<span class="downloads"><a href="${folder}/${name}.csv" download>Data (CSV)</a> ` +
    `<a href="${folder}/${name}.json" download>Specification (Vega-Lite)</a></span></figcaption>` +
    `<details><summary>Values</summary><div class="table-scroll" role="group" aria-label="${title}, values" tabindex="0">` +
    `<table><thead><tr>${head}</tr></thead><tbody>${rows.join('')}</tbody></table></div></details></figure>`
  );
}
