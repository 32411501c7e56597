import { describe, expect, test } from 'vitest';
import { fileText, formatProblem, problemAt, sortProblems } from '../../plugins/problems.ts';

const file = fileText('notes/lamp.md', 'first\r\n\tR1: { resistor: 5 V }\nlast');

describe('a problem', () => {
  test('is shown with its line and a caret under it, tabs kept', () => {
    const problem = problemAt(
      file,
      { line: 2, column: 18, length: 3 },
      { message: 'no', expected: 'a resistance', example: '47 Ω' },
    );
    expect(formatProblem(problem)).toBe(
      [
        'notes/lamp.md:2:18: error: no',
        '  \tR1: { resistor: 5 V }',
        '  \t                ^^^',
        '  expected: a resistance',
        '  example: 47 Ω',
      ].join('\n'),
    );
  });

  test('is brought within the file', () => {
    expect(problemAt(file, { line: 9, column: 99, length: 99 }, { message: 'x' })).toMatchObject({
      line: 3,
      column: 5,
      length: 1,
      sourceLine: 'last',
    });
    expect(problemAt(file, { line: 0, column: 0, length: 0 }, { message: 'x' })).toMatchObject({
      line: 1,
      column: 1,
      length: 1,
    });
  });

  test('stands in the order of lines, those of other files last', () => {
    const other = fileText('parts/a.yaml', 'x\ny');
    const at = (text: typeof file, line: number) => problemAt(text, { line, column: 1, length: 1 }, { message: 'x' });
    const sorted = sortProblems([at(other, 1), at(file, 3), at(file, 1)], file.file);
    expect(sorted.map((problem) => `${problem.file}:${problem.line}`)).toEqual([
      'notes/lamp.md:1',
      'notes/lamp.md:3',
      'parts/a.yaml:1',
    ]);
  });
});
