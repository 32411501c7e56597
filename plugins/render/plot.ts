/** A plot rendered: an SVG whose colours follow the page, the specification it was drawn from, and its values. */
import * as vega from 'vega';
import { compile, type TopLevelSpec } from 'vega-lite';
import type { SolvedPlot } from '../results.ts';
import { escapeHtml } from './html.ts';
import { describePlot } from './plot-description.ts';
import { opensAddress } from './plot-guard.ts';
import { mergeAuthorSpecification } from './plot-merge.ts';
import { PLOT_PALETTE } from './plot-palette.ts';
import { FONT, type Json, plotSpecification, STAND_INS } from './plot-spec.ts';
import { plotCsv, powerOfTen, type ValueTable, valueTable } from './plot-table.ts';

const STAND_IN = /#010[ab]0\d/g;
const VARIABLES = new Map(Object.entries(STAND_INS).map(([variable, standIn]) => [standIn, variable]));

export interface RenderedPlot {
  readonly svg: string;
  /** Vega-Lite, with the colours of a light page. */
  readonly spec: Json;
  readonly csv: string;
  readonly description: string;
  readonly warnings: readonly string[];
  readonly table: ValueTable;
}

/** `id` is unique in the page: all ids of the drawing begin with it. Throws where the author's `vega:` leaves nothing that can be drawn. */
export async function renderPlot(plot: SolvedPlot, options: { readonly id: string }): Promise<RenderedPlot> {
  const warnings: string[] = [];
  const own = plotSpecification(plot);
  const specification = plot.block.vega ? mergeAuthorSpecification(own, plot.block.vega) : own;
  const description = describePlot(plot);
  const drawing = await draw(specification, warnings);
  const title = plot.block.title ?? 'Plot';
  return {
    svg: dress(drawing, options.id, title, description),
    spec: JSON.parse(withColours(JSON.stringify(specification), (variable) => PLOT_PALETTE[variable]!.light)) as Json,
    csv: plotCsv(plot),
    description,
    warnings,
    table: valueTable(plot),
  };
}

async function draw(specification: Json, warnings: string[]): Promise<string> {
  const logger = {
    level: () => logger,
    error: (...words: unknown[]) => note(words),
    warn: (...words: unknown[]) => note(words),
    info: () => logger,
    debug: () => logger,
  };
  function note(words: readonly unknown[]): typeof logger {
    warnings.push(words.map(String).join(' '));
    return logger;
  }
  const compiled = compile(specification as unknown as TopLevelSpec, { logger: logger as never });
  // numbering starts anew for each drawing, so that the same plot is the same bytes
  vega.resetSVGDefIds();
  const view = new vega.View(vega.parse(compiled.spec), {
    renderer: 'none',
    logger: logger as never,
    loader: NOTHING as never,
  });
  try {
    const svg = await view.toSVG();
    if (/<path[^>]* d="[^"]*NaN/.test(svg)) throw new Error('a size or a scale is not a number');
    return svg;
  } finally {
    view.finalize();
  }
}

/** Whatever a specification asks for, nothing is loaded. */
const NOTHING = {
  load: () => Promise.reject(new Error('a plot loads nothing')),
  sanitize: () => Promise.reject(new Error('a plot opens nothing')),
  http: () => Promise.reject(new Error('a plot loads nothing')),
  file: () => Promise.reject(new Error('a plot loads nothing')),
};

/** Makes the drawing part of a page: its own ids, the page's colours, a title and a description for those who do not see it. */
function dress(svg: string, id: string, title: string, description: string): string {
  const size = /viewBox="0 0 ([\d.]+) ([\d.]+)"/.exec(svg);
  const width = size ? Math.ceil(Number(size[1])) : 700;
  const height = size ? Math.ceil(Number(size[2])) : 320;
  const inner = svg
    .replace(/^<svg[^>]*>/, '')
    // labels that would overlap others are there all the same, unseen
    .replace(/<text[^>]* opacity="0"[^>]*>[^<]*<\/text>/g, '')
    .replace(/<path class="foreground" d=""[^>]*\/>/g, '')
    .replace(/<[^>]*>/g, (tag) => dressTag(tag, id))
    .replace(/>(\u2212?[\d.]+)e([+-]\d+)</g, (_, mantissa: string, exponent: string) => {
      return `>${powerOfTen(mantissa, exponent)}<`;
    });
  return (
    `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${width} ${height}" width="${width}" height="${height}" font-family="${escapeHtml(FONT)}" role="img" aria-labelledby="${id}-title ${id}-desc">` +
    `<title id="${id}-title">${escapeHtml(title)}</title><desc id="${id}-desc">${escapeHtml(description)}</desc>${inner}`
  );
}

/** One tag of the drawing: ids get their prefix, colours their variables (a light page's where no style is), and what the page does not need goes. */
function dressTag(tag: string, id: string): string {
  const dressed = tag
    .replace(/(\bid=")([^"]*")/g, `$1${id}-$2`)
    .replace(/url\(#([^)]*)\)/g, `url(#${id}-$1)`)
    .replace(/(href="#)([^"]*")/g, `$1${id}-$2`)
    // roles and labels of the parts would be read out one by one: the description says it in a sentence
    .replace(/ (?:role|aria-[a-z]+|class|pointer-events)="[^"]*"/g, '')
    .replace(/ (?:opacity="1"|stroke-dasharray="")/g, '')
    .replace(` font-family="${escapeHtml(FONT)}"`, '');
  if (opensAddress(dressed)) throw new Error('a colour opens an address');
  return withColours(dressed, (variable) => `var(${variable}, ${PLOT_PALETTE[variable]!.light})`);
}

function withColours(text: string, replacement: (variable: string) => string): string {
  return text.replace(STAND_IN, (standIn) => {
    const variable = VARIABLES.get(standIn);
    return variable === undefined ? standIn : replacement(variable);
  });
}
