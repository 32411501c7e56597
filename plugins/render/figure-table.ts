/** Figures as a table in the data-sheet custom: minimum, typical, maximum, unit, limit, verdict. */
import type { Unit } from '../language/units.ts';
import type { FigureResult, FigureTable, Measured, Verdict } from '../results.ts';
import { escapeHtml, slug } from './html.ts';
import { alignedAtPoint, limitText, numberText, typographicWords, unitFor } from './number-text.ts';

const VERDICTS: {
  readonly [verdict in Verdict]: { readonly sign: string; readonly word: string; readonly name: string };
} = {
  kept: { sign: '✓', word: 'kept', name: 'kept' },
  broken: { sign: '✗', word: 'broken', name: 'broken' },
  'too close to call': { sign: '≈', word: 'too close to call', name: 'close' },
};

export function renderFigureTable(table: FigureTable): string {
  const results = table.results.filter(({ figure }) => !figure.hidden);
  if (results.length === 0) return '';
  const has = (test: (result: FigureResult) => boolean): boolean => results.some(test);
  const conditions = results.map((result) => typographicWords(result.conditions.join('; ')));
  const shared = new Set(conditions).size === 1 ? conditions[0]! : undefined;
  const columns: { head: string; cell: (result: FigureResult, unit: Unit) => string; number?: boolean }[] = [
    { head: 'Parameter', cell: ({ figure }) => escapeHtml(figure.label ?? figure.name.replaceAll('_', ' ')) },
  ];
  if (has(({ figure }) => figure.symbol !== undefined))
    columns.push({ head: 'Symbol', cell: ({ figure }) => symbolHtml(figure.symbol) });
  if (shared === undefined)
    columns.push({ head: 'Conditions', cell: (result) => escapeHtml(typographicWords(result.conditions.join('; '))) });
  const number = (pick: (result: FigureResult) => Measured | undefined) => (result: FigureResult, unit: Unit) => {
    const measured = pick(result);
    return measured ? numberText(measured, unit, result.figure.digits) : '–';
  };
  columns.push({ head: 'Minimum', cell: number(({ minimum }) => minimum), number: true });
  columns.push({ head: 'Typical', cell: number(({ nominal }) => nominal), number: true });
  columns.push({ head: 'Maximum', cell: number(({ maximum }) => maximum), number: true });
  columns.push({ head: 'Unit', cell: (_, unit) => escapeHtml(unit.text) });
  if (has(({ figure }) => figure.must !== undefined)) {
    columns.push({ head: 'Limit', cell: (result, unit) => escapeHtml(limitOf(result, unit)) });
    columns.push({ head: 'Verdict', cell: ({ verdict }) => (verdict ? verdictHtml(verdict) : '') });
  }
  if (has(({ figure }) => figure.requirement !== undefined))
    columns.push({ head: 'Requirement', cell: ({ figure }) => escapeHtml(figure.requirement ?? '') });

  const caption = escapeHtml(
    table.block.caption ?? (table.block.name === 'figures' ? 'Figures' : titleFrom(table.block.name)),
  );
  const under = shared ? ` <span class="conditions">${escapeHtml(shared)}</span>` : '';
  const head = columns
    .map(({ head, number }) => `<th scope="col"${number ? ' class="number"' : ''}>${head}</th>`)
    .join('');
  const units = results.map(({ figure, nominal, minimum, maximum }) => {
    const magnitude = Math.max(...[nominal, minimum, maximum].map((measured) => Math.abs(measured?.value ?? 0)));
    return unitFor(figure.unit, figure.expression.dimension, magnitude);
  });
  const cells = columns.map(({ cell, number }) => {
    const texts = results.map((result, row) => cell(result, units[row]!));
    return number ? alignedAtPoint(texts) : texts;
  });
  const rows = results.map(({ figure }, row) => {
    const [first, ...others] = columns.map(({ number }, k) =>
      number ? `<td class="number">${cells[k]![row]}</td>` : k === 0 ? cells[k]![row]! : `<td>${cells[k]![row]}</td>`,
    );
    return `<tr id="figure_${slug(figure.name)}"><th scope="row">${first}</th>${others.join('')}</tr>`;
  });
  return (
    `<div class="table-scroll" role="group" aria-label="${caption}" tabindex="0"><table class="figures"><caption>${caption}${under}</caption>` +
    `<thead><tr>${head}</tr></thead><tbody>${rows.join('')}</tbody></table></div>`
  );
}

export function verdictHtml(verdict: Verdict): string {
  const { sign, word, name } = VERDICTS[verdict];
  return `<span class="verdict verdict-${name}"><span aria-hidden="true">${sign}</span> ${word}</span>`;
}

function limitOf({ lowerLimit, upperLimit, figure }: FigureResult, unit: Unit): string {
  const { must } = figure;
  if (!must) return '';
  const low = lowerLimit === undefined ? undefined : limitText(lowerLimit, unit);
  const high = upperLimit === undefined ? undefined : limitText(upperLimit, unit);
  if (low !== undefined && high !== undefined) return `${low}\u00a0…\u00a0${high}`;
  if (low !== undefined) return `${must.lower?.inclusive ? '≥' : '>'}\u00a0${low}`;
  if (high !== undefined) return `${must.upper?.inclusive ? '≤' : '<'}\u00a0${high}`;
  return must.text;
}

/** `I_F(av)`: what follows the first underscore is set as an index. */
function symbolHtml(symbol: string | undefined): string {
  if (symbol === undefined) return '';
  const cut = symbol.indexOf('_');
  if (cut < 0) return `<i>${escapeHtml(symbol)}</i>`;
  return `<i>${escapeHtml(symbol.slice(0, cut))}</i><sub>${escapeHtml(symbol.slice(cut + 1))}</sub>`;
}

export function titleFrom(name: string): string {
  const words = name.replace(/[-_]+/g, ' ').trim();
  return words.charAt(0).toUpperCase() + words.slice(1);
}
