/** The components of a circuit as a table. */
import type { CircuitBlock, ComponentDescription } from '../language/model.ts';
import { titleFrom } from './figure-table.ts';
import { escapeHtml, slug } from './html.ts';
import { typographicWords } from './number-text.ts';

export function renderCircuit(block: CircuitBlock): string {
  const caption = escapeHtml(block.caption ?? (block.name === 'circuit' ? 'Circuit' : titleFrom(block.name)));
  const hasParts = block.components.some(({ part }) => part !== undefined);
  const heads = ['Component', 'Kind', 'Value', ...(hasParts ? ['Part'] : []), 'Between'];
  const rows = block.components.map((component) => {
    const { designator, kind, nodes, part } = component;
    const cells = [kind, valueText(component), ...(hasParts ? [part ?? ''] : []), nodes.join(' – ')];
    return (
      `<tr id="${componentAnchor(block.name, designator)}"><th scope="row">${escapeHtml(designator)}</th>` +
      `${cells.map((cell) => `<td>${escapeHtml(cell)}</td>`).join('')}</tr>`
    );
  });
  return (
    `<div class="table-scroll" role="group" aria-label="${caption}" tabindex="0"><table class="components"><caption>${caption}</caption>` +
    `<thead><tr>${heads.map((head) => `<th scope="col">${head}</th>`).join('')}</tr></thead><tbody>${rows.join('')}</tbody></table></div>`
  );
}

/** Where a component's row is. */
export function componentAnchor(circuit: string, designator: string): string {
  return `component_${slug(circuit)}-${slug(designator)}`;
}

/** A part that is a whole model has no value of its own. */
function valueText({ value, part }: ComponentDescription): string {
  return value === part ? '–' : typographicWords(value);
}
