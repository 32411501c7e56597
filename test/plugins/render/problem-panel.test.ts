import { expect, test } from 'vitest';
import type { Problem } from '../../../plugins/problems.ts';
import { problemList, problemPanel } from '../../../plugins/render/problem-panel.ts';
import { unbalanced } from './notes.ts';

const problem: Problem = {
  file: 'content/notes/<a>.md',
  line: 12,
  column: 6,
  length: 3,
  sourceLine: '\tR1: <b>"5 V"</b>',
  message: 'a resistance is due, `5 V` is a <voltage>',
  expected: 'a resistance, e.g. `47 Ω`',
  example: 'R1: { resistor: 47 Ω & more }',
  severity: 'error',
};

test('a panel quotes the line, with a caret under what is wrong', () => {
  const html = problemPanel(problem);
  expect(html).toContain('content/notes/&lt;a&gt;.md:12:6');
  // the tab is kept, so that the caret stands where the text does
  expect(html).toContain('\tR1: &lt;b&gt;&quot;5 V&quot;&lt;/b&gt;\n\t    ^^^</code>');
  expect(html).toContain('<code>5 V</code> is a &lt;voltage&gt;');
  expect(html).toContain('<dt>Expected</dt><dd>a resistance, e.g. <code>47 Ω</code></dd>');
  expect(html).toContain('<code>R1: { resistor: 47 Ω &amp; more }</code>');
  expect(unbalanced(html)).toBeUndefined();
});

test('the list at the head leads to panels, and shows whole what has none', () => {
  const warning: Problem = { ...problem, severity: 'warning' };
  const html = problemList([{ problem, id: 'problem_1' }, { problem: warning }]);
  expect(html).toContain('1 problem and 1 warning in this note');
  expect(html).toContain('<a href="#problem_1">line 12</a>');
  expect(html.match(/<pre/g)).toHaveLength(1);
  expect(html).toContain('problem-warning');
  expect(unbalanced(html)).toBeUndefined();
  expect(problemList([])).toBe('');
});
