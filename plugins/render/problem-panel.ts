/** A problem as a visible panel where the block was, and the list of all problems at the head of a note. */
import type { Problem } from '../problems.ts';
import { escapeHtml } from './html.ts';

/** `id` lets the list at the head of the note lead here. */
export function problemPanel(problem: Problem, id?: string): string {
  const { file, line, column, length, sourceLine, message, expected, example, severity } = problem;
  const caret = `${sourceLine.slice(0, column - 1).replace(/[^\t]/g, ' ')}${'^'.repeat(length)}`;
  const place = `${file}:${line}:${column}`;
  const rows = [
    expected === undefined ? '' : `<dt>Expected</dt><dd>${codeSpans(expected)}</dd>`,
    example === undefined ? '' : `<dt>Example</dt><dd><code>${escapeHtml(example)}</code></dd>`,
  ].join('');
  return [
    `<div class="problem problem-${severity}" role="group" aria-label="${WORDS[severity]}"${id === undefined ? '' : ` id="${id}"`}>`,
    `<p><strong>${WORDS[severity]}</strong> ${codeSpans(message)}</p>`,
    `<p class="problem-place">${escapeHtml(place)}</p>`,
    `<pre tabindex="0" aria-label="Source line"><code>${escapeHtml(sourceLine)}\n${escapeHtml(caret)}</code></pre>`,
    rows === '' ? '' : `<dl>${rows}</dl>`,
    '</div>',
  ].join('');
}

const WORDS: { readonly [severity in Problem['severity']]: string } = { error: 'Problem', warning: 'Warning' };

/** All problems of a note. Those with a panel of their own further down lead to it; the others (`id` undefined) are shown whole here. */
export function problemList(entries: readonly { readonly problem: Problem; readonly id?: string }[]): string {
  if (entries.length === 0) return '';
  const errors = entries.filter(({ problem }) => problem.severity === 'error').length;
  const warnings = entries.length - errors;
  const parts = [
    ...(errors > 0 ? [`${errors} ${errors === 1 ? 'problem' : 'problems'}`] : []),
    ...(warnings > 0 ? [`${warnings} ${warnings === 1 ? 'warning' : 'warnings'}`] : []),
  ];
  const items = entries.map(({ problem, id }) =>
    id === undefined
      ? `<li>${problemPanel(problem)}</li>`
      : `<li><a href="#${id}">line ${problem.line}</a>: ${codeSpans(problem.message)}</li>`,
  );
  return (
    `<section class="problem-list${errors > 0 ? '' : ' only-warnings'}" aria-labelledby="problems">` +
    `<h2 id="problems">${parts.join(' and ')} in this note</h2><ol>${items.join('')}</ol></section>`
  );
}

/** Escapes, and sets what stands between backticks as code. */
function codeSpans(text: string): string {
  return escapeHtml(text).replace(/`([^`]+)`/g, '<code>$1</code>');
}
