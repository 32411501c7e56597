/** A problem as a visible panel where the block was, and the list of all problems at the head of a note. */
import type { Problem } from '../problems.ts';
import { escapeHtml } from './html.ts';

export function problemPanel(problem: Problem): string {
  const { file, line, column, length, sourceLine, message, expected, example, severity } = problem;
  const caret = `${sourceLine.slice(0, column - 1).replace(/[^\t]/g, ' ')}${'^'.repeat(length)}`;
  const rows = [
    expected === undefined ? '' : `<dt>Expected</dt><dd>${codeSpans(expected)}</dd>`,
    example === undefined ? '' : `<dt>Example</dt><dd><code>${escapeHtml(example)}</code></dd>`,
  ].join('');
  return [
    `<div class="problem problem-${severity}" role="group" aria-label="${severity === 'error' ? 'Problem' : 'Warning'}">`,
    `<p><strong>${severity === 'error' ? 'Problem' : 'Warning'}</strong> ${codeSpans(message)}</p>`,
    `<pre tabindex="0"><code><span class="problem-place">${escapeHtml(`${file}:${line}:${column}`)}</span>\n`,
    `${escapeHtml(sourceLine)}\n${escapeHtml(caret)}</code></pre>`,
    rows === '' ? '' : `<dl>${rows}</dl>`,
    '</div>',
  ].join('');
}

export function problemList(problems: readonly Problem[]): string {
  if (problems.length === 0) return '';
  const errors = problems.filter(({ severity }) => severity === 'error').length;
  const heading =
    errors > 0 ? `${errors} ${errors === 1 ? 'problem' : 'problems'} in this note` : 'Warnings in this note';
  const items = problems.map((problem) => `<li>line ${problem.line}: ${codeSpans(problem.message)}</li>`).join('');
  return `<section class="problem-list" aria-labelledby="problems"><h2 id="problems">${heading}</h2><ol>${items}</ol></section>`;
}

/** Escapes, and sets what stands between backticks as code. */
function codeSpans(text: string): string {
  return escapeHtml(text).replace(/`([^`]+)`/g, '<code>$1</code>');
}
