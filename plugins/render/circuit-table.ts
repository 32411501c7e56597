/** The components of a circuit as a table. */
import type { CircuitBlock } from '../language/model.ts';
import { titleFrom } from './figure-table.ts';
import { escapeHtml, slug } from './html.ts';

export function renderCircuit(block: CircuitBlock): string {
  const caption = escapeHtml(block.caption ?? (block.name === 'circuit' ? 'Circuit' : titleFrom(block.name)));
  const rows = block.components.map(({ designator, kind, value, nodes, part }) => {
    const cells = [
      escapeHtml(kind),
      escapeHtml(part === undefined ? value : `${value}`),
      nodes.map(escapeHtml).join(' – '),
    ];
    const id = `${slug(block.name)}-${slug(designator)}`;
    return `<tr id="component-${id}"><th scope="row">${escapeHtml(designator)}</th>${cells.map((cell) => `<td>${cell}</td>`).join('')}</tr>`;
  });
  return (
    `<div class="table-scroll" role="group" aria-label="${caption}" tabindex="0"><table class="components"><caption>${caption}</caption>` +
    '<thead><tr><th scope="col">Component</th><th scope="col">Kind</th><th scope="col">Value</th><th scope="col">Between</th></tr></thead>' +
    `<tbody>${rows.join('')}</tbody></table></div>`
  );
}
