import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { takeApart } from '../../../plugins/language/fences.ts';
import type { Place } from '../../../plugins/language/model.ts';
import { placeOf } from '../../../plugins/language/passage.ts';
import { readValueDirective } from '../../../plugins/language/value-directive.ts';
import { fileText, type Problem } from '../../../plugins/problems.ts';

function read(text: string) {
  const file = fileText('note.md', text);
  const problems: Problem[] = [];
  const parts = takeApart(file, problems);
  const shown = ({ line, column, length }: Place) => file.lines[line - 1]!.slice(column - 1, column - 1 + length);
  return { ...parts, problems, file, shown };
}

describe('front matter', () => {
  test('is counted in lines, with every kind of line end and a byte order mark', () => {
    for (const end of ['\n', '\r\n', '\r']) {
      const { frontMatter, fences } = read(
        `\ufeff${['---', 'title: X', '---', '', '```plot', 'lines: [a]', '```'].join(end)}`,
      );
      expect(frontMatter?.text).toBe('title: X');
      expect(frontMatter?.firstLine).toBe(2);
      expect(fences[0]).toMatchObject({ kind: 'plot', line: 5, endLine: 7 });
      expect(fences[0]!.body.text).toBe('lines: [a]');
    }
  });

  test('may be missing, or empty', () => {
    expect(read('text').frontMatter).toBeUndefined();
    expect(read('---\n---\ntext').frontMatter?.text).toBe('');
    expect(read('a\n\n---\n\nb').frontMatter).toBeUndefined();
  });

  test('that is never closed is a problem', () => {
    expect(read('---\ntitle: X\n').problems[0]).toMatchObject({ line: 1, column: 1, length: 3 });
  });
});

describe('blocks', () => {
  test('know their lines, their names, and their columns within lists and quotes', () => {
    const { fences, shown } = read(
      ['> ```circuit lamp', '> a: 1', '> b: 2', '> ```', '', '- item', '', '  ~~~figures', '  x: y', '  ~~~'].join(
        '\n',
      ),
    );
    expect(fences.map(({ kind, name, line, endLine }) => [kind, name, line, endLine])).toEqual([
      ['circuit', 'lamp', 1, 4],
      ['figures', 'figures', 8, 10],
    ]);
    expect(fences[0]!.body.text).toBe('a: 1\nb: 2');
    expect(placeOf(fences[0]!.body, 5, 6)).toEqual({ line: 3, column: 3, length: 1 });
    expect(shown(placeOf(fences[1]!.body, 3, 4))).toBe('y');
    expect(shown(fences[0]!.namePlace)).toBe('lamp');
  });

  test('other fences, and fences within fences, are none', () => {
    expect(read('```js\n1\n```\n\n````md\n```circuit\n```\n````\n').fences).toEqual([]);
    expect(read('    ```circuit\n    indented code\n    ```').fences).toEqual([]);
  });

  test.each([
    ['```circiut lamp\n```', '1:4', 'warning', '`circuit`'],
    ['```circuit lamp\na: 1', '1:4', 'error', '```'],
    ['```plot a b\n```', '1:11', 'error', 'one name'],
    ['```plot 1st\n```', '1:9', 'error', 'beginning with a letter'],
  ])('%s', (text, place, severity, expected) => {
    const [problem] = read(text).problems;
    expect(`${problem!.line}:${problem!.column}`).toBe(place);
    expect(problem!.severity).toBe(severity);
    expect(problem!.expected).toContain(expected);
  });
});

describe('computed values', () => {
  test('are found with their columns, several on several lines', () => {
    const { directives, shown } = read(
      [
        '# Of :val[a]',
        '',
        'A `:val[no]` and :val[f(b)[1]]{in=mA digits=3}, then',
        '  :val[c]{in="V/µs"} and **:val[d]**.',
        '',
        '| x | y |',
        '| --- | --- |',
        '| :val[e] | `:val[e]` :val[e] |',
        '',
        '> said :val[g]',
      ].join('\n'),
    );
    expect(directives.map(({ place }) => shown(place))).toEqual([
      ':val[a]',
      ':val[f(b)[1]]{in=mA digits=3}',
      ':val[c]{in="V/µs"}',
      ':val[d]',
      ':val[e]',
      ':val[e]',
      ':val[g]',
    ]);
    expect(directives.map(({ place }) => [place.line, place.column])).toEqual([
      [1, 6],
      [3, 18],
      [4, 3],
      [4, 28],
      [8, 3],
      [8, 23],
      [10, 8],
    ]);
    expect(directives.map(({ index }) => index)).toEqual([0, 1, 2, 3, 4, 5, 6]);
    expect(directives[1]!.directive).toMatchObject({ expression: 'f(b)[1]', unit: { text: 'mA' }, digits: 3 });
    for (const { expression } of directives) {
      expect(shown(placeOf(expression, 0, expression.text.length))).toBe(expression.text);
    }
  });

  test('may run over a line end', () => {
    const { directives } = read('Here :val[a +\n  b]{in=V}.');
    expect(directives[0]!.directive.expression).toBe('a +\n  b');
    expect(placeOf(directives[0]!.expression, 6, 7)).toEqual({ line: 2, column: 3, length: 1 });
  });

  test('an escaped colon, a code span and a fence hide them', () => {
    expect(read('\\:val[a] ``:val[b]``\n\n```\n:val[c]\n```').directives).toEqual([]);
  });

  test.each([
    ['x :val[a', '1:3', 'not closed'],
    ['x :val[a]{in=V', '1:10', 'not closed'],
    ['x :val[a]{unit=V}', '1:11', '`unit=V`'],
    ['x :val[a]{digits=0}', '1:11', 'significant digits'],
  ])('%s', (text, place, message) => {
    const [problem] = read(text).problems;
    expect(`${problem!.line}:${problem!.column}`).toBe(place);
    expect(problem!.message).toContain(message);
  });
});

describe('any text', () => {
  const pieces = [
    '---',
    '\n',
    '\r\n',
    '```',
    'circuit',
    'plot x',
    ':val[',
    ']',
    '{',
    '}',
    'in=',
    'V',
    '> ',
    '- ',
    '| ',
    '`',
    ' ',
    '    ',
    'a: 1',
    '#',
    '**',
    '\t',
    '\\',
    '~~~',
    '<b>',
    '&amp;',
  ];
  const texts = fc.oneof(
    fc.array(fc.constantFrom(...pieces), { maxLength: 60 }).map((list) => list.join('')),
    fc.string({ unit: 'binary', maxLength: 60 }),
  );

  test('is taken apart, with every place within the file', () => {
    fc.assert(
      fc.property(texts, (text) => {
        const { problems, fences, directives, file } = read(text);
        for (const { line, column } of [
          ...problems,
          ...directives.map(({ place }) => place),
          ...fences.map(({ namePlace }) => namePlace),
        ]) {
          expect(line).toBeGreaterThanOrEqual(1);
          expect(line).toBeLessThanOrEqual(file.lines.length);
          expect(column).toBeGreaterThanOrEqual(1);
          expect(column).toBeLessThanOrEqual(file.lines[line - 1]!.length + 1);
        }
        for (const { line, endLine } of fences) expect(endLine).toBeGreaterThanOrEqual(line);
      }),
      { numRuns: 1000 },
    );
  });

  test('a directive ends after it begins, within the text', () => {
    fc.assert(
      fc.property(texts, (text) => {
        const found = readValueDirective(`:val[${text}`, 0);
        if (found) expect(found.end).toBeLessThanOrEqual(text.length + 5);
      }),
    );
  });
});
