import fc from 'fast-check';
import { load } from 'js-yaml';
import { describe, expect, test } from 'vitest';
import { passageOf } from '../../../plugins/language/passage.ts';
import { plainValue } from '../../../plugins/language/plain-value.ts';
import {
  entryOf,
  placeWithin,
  readYaml,
  reportRepeatedKeys,
  type YamlNode,
  type YamlScalar,
} from '../../../plugins/language/yaml-tree.ts';
import { fileText, type Problem } from '../../../plugins/problems.ts';

/** Reads a text that begins in line 3 of its file, indented by two, as in a list. */
function read(text: string) {
  const lines = text.split('\n').map((line) => (line === '' ? '' : `  ${line}`));
  const file = fileText('note.md', ['first', 'second', ...lines].join('\n'));
  const problems: Problem[] = [];
  const tree = readYaml(passageOf(file, text, 3, problems));
  if (tree) reportRepeatedKeys(tree);
  return { tree, problems, lines: file.lines };
}

function scalarAt(tree: YamlNode | undefined, ...path: (string | number)[]): YamlScalar {
  let node = tree;
  for (const step of path) {
    if (node?.type === 'mapping') node = entryOf(node, String(step))?.value;
    else if (node?.type === 'sequence') node = node.items[Number(step)];
  }
  if (node?.type !== 'scalar') throw new Error(`no scalar at ${path.join('.')}`);
  return node;
}

describe('places', () => {
  test('of keys and values', () => {
    const { tree } = read('R1: { resistor: 47 Ω ±5 %, nodes: [line, a] }\nC1:\n  capacitor: "1 µF"');
    expect(scalarAt(tree, 'R1', 'resistor').place).toEqual({ line: 3, column: 19, length: 9 });
    expect(scalarAt(tree, 'R1', 'nodes', 1).place).toEqual({ line: 3, column: 44, length: 1 });
    // A quoted value is pointed at with its marks.
    expect(scalarAt(tree, 'C1', 'capacitor').place).toEqual({ line: 5, column: 16, length: 6 });
    expect(tree?.type === 'mapping' && tree.entries[1]?.keyNode.place).toEqual({ line: 4, column: 3, length: 2 });
  });

  test('within a value: quotes, escapes and folded lines', () => {
    const { tree } = read("a: \"x\\u00b5y z\"\nb: one\n  two three\nc: 'it''s so'");
    expect(placeWithin(scalarAt(tree, 'a'), 4, 5)).toEqual({ line: 3, column: 16, length: 1 });
    // `two` of the folded text stands in the next line.
    expect(placeWithin(scalarAt(tree, 'b'), 4, 7)).toEqual({ line: 5, column: 5, length: 3 });
    expect(placeWithin(scalarAt(tree, 'c'), 5, 7)).toEqual({ line: 6, column: 13, length: 2 });
  });

  test('a value that is not there stands at its key', () => {
    const { tree } = read('a:\nb: 1');
    expect(scalarAt(tree, 'a').place).toEqual({ line: 3, column: 4, length: 1 });
  });
});

describe('what plain YAML would read otherwise', () => {
  test.each(['>= 2 mA', '> 2 mA', '< 20 mA', '<= 0.8 * D1.rating.forward_current', '>5', '2 mA .. 20 mA'])(
    'a limit `%s`',
    (limit) => {
      expect(scalarAt(read(`must: ${limit}`).tree, 'must').text).toBe(limit);
      expect(scalarAt(read(`x: { must: ${limit}, in: mA }`).tree, 'x', 'must').text).toBe(limit);
      expect(scalarAt(read(`must: ${limit} # as agreed`).tree, 'must').text).toBe(limit);
    },
  );

  test('a comma within parentheses', () => {
    const { tree, problems } = read('{ is: at(f(x, 2), 2 ms), in: mA, list: [at(x, 1), y] }');
    expect(problems).toEqual([]);
    expect(scalarAt(tree, 'is').text).toBe('at(f(x, 2), 2 ms)');
    expect(scalarAt(tree, 'list', 0).text).toBe('at(x, 1)');
    expect(scalarAt(tree, 'list', 1).text).toBe('y');
  });

  test('folded and literal texts stay what they are', () => {
    expect(scalarAt(read('a: >-\n  x > y\n  z').tree, 'a').text).toBe('x > y z');
    expect(scalarAt(read('a: |-\n  f(a, b)\n  z').tree, 'a').text).toBe('f(a, b)\nz');
    expect(scalarAt(read('a: ">= (1, 2)"').tree, 'a').text).toBe('>= (1, 2)');
  });
});

describe('problems', () => {
  test.each([
    ['a: { b: 1', '3:12', 'opened and not closed'],
    ['a: "x', '3:8', 'quotation mark'],
    ['a: *x', '3:6', '`*x` is a YAML alias'],
    ['a: &x 1', '3:6', 'YAML anchor'],
    ['a: !!str 1', '3:6', 'YAML tag'],
    ['a: @x', '3:6', 'cannot begin with `@`'],
    ['a: b: c', '3:7', 'a colon and a blank'],
    ['a: 1\n\tb: 2', '4:3', 'a tab'],
    ['a: 1\n b: 2', '4:5', 'indented otherwise'],
    ['a: 1\na: 2', '4:3', '`a` comes twice: it stands already in line 3'],
    ['a: 1\n---\nb: 2', '5:3', 'second YAML document'],
    ['? [a]\n: 1', '3:5', 'this key is a list'],
    [`${'['.repeat(2000)}`, '3:42', 'levels deep'],
  ])('%s', (text, place, message) => {
    const { problems } = read(text);
    expect(problems.map(({ line, column }) => `${line}:${column}`)).toContain(place);
    expect(problems.map((problem) => problem.message).join('; ')).toContain(message);
  });

  test('names of JavaScript are names like others', () => {
    const { tree } = read('__proto__: 1\nconstructor: 2\ntoString: 3');
    expect(scalarAt(tree, '__proto__').text).toBe('1');
    expect(scalarAt(tree, 'toString').text).toBe('3');
    expect(Object.hasOwn(Object.prototype, 'polluted')).toBe(false);
  });
});

describe('any text', () => {
  const alphabet = [
    'a',
    'b',
    ': ',
    ':',
    '\n',
    '  ',
    '- ',
    '{',
    '}',
    '[',
    ']',
    ', ',
    '"',
    "'",
    '#',
    '>',
    '|',
    '&',
    '*',
    '!',
    '%',
    '(',
    ')',
    'Ω',
    '\t',
    '\\',
    '~',
  ];
  const texts = fc.oneof(
    fc.array(fc.constantFrom(...alphabet), { maxLength: 40 }).map((pieces) => pieces.join('')),
    fc.string({ unit: 'grapheme', maxLength: 60 }),
  );

  test('is read or refused, with every place within the file', () => {
    fc.assert(
      fc.property(texts, (text) => {
        const { tree, problems, lines } = read(text.replaceAll('\r', ''));
        const check = ({ line, column, length }: { line: number; column: number; length: number }) => {
          expect(line).toBeGreaterThanOrEqual(1);
          expect(line).toBeLessThanOrEqual(lines.length);
          expect(column).toBeGreaterThanOrEqual(1);
          expect(column).toBeLessThanOrEqual(lines[line - 1]!.length + 1);
          expect(length).toBeGreaterThanOrEqual(1);
        };
        problems.forEach(check);
        const visit = (node: YamlNode) => {
          expect(node.place.line).toBeGreaterThanOrEqual(3);
          if (node.type === 'scalar')
            expect(node.offsets.length === 0 || node.offsets.length === node.text.length).toBe(true);
          if (node.type === 'sequence') node.items.forEach(visit);
          if (node.type === 'mapping') for (const entry of node.entries) visit(entry.value);
        };
        if (tree) visit(tree);
      }),
      { numRuns: 1000 },
    );
  });

  test('a plain scalar stands where it says', () => {
    const word = fc.stringMatching(/^[a-z][a-zΩ0-9 ]{0,8}[a-z0-9]$/);
    const trees = fc.letrec((tie) => ({
      node: fc.oneof({ depthSize: 'small' }, word, tie('list'), tie('map')),
      list: fc.array(tie('node'), { minLength: 1, maxLength: 3 }).map((items) => `[${items.join(', ')}]`),
      map: fc.dictionary(word, tie('node'), { minKeys: 1, maxKeys: 3, noNullPrototype: true }).map(
        (entries) =>
          `{ ${Object.entries(entries)
            .map(([key, value]) => `${key}: ${value}`)
            .join(', ')} }`,
      ),
    })).node as fc.Arbitrary<string>;
    fc.assert(
      fc.property(trees, (text) => {
        const { tree, lines } = read(`top: ${text}`);
        const visit = (node: YamlNode) => {
          const { line, column, length } = node.place;
          const shown = lines[line - 1]!.slice(column - 1, column - 1 + length);
          if (node.type === 'scalar') expect(shown).toBe(node.text);
          else expect(shown.startsWith(node.type === 'sequence' ? '[' : '{') || node === tree).toBe(true);
          if (node.type === 'sequence') node.items.forEach(visit);
          if (node.type === 'mapping') for (const entry of node.entries) [entry.keyNode, entry.value].forEach(visit);
        };
        visit(tree!);
        // The reader of structure is js-yaml's; what is built from it agrees with its own loader.
        expect(JSON.stringify(plainValue(tree!))).toBe(JSON.stringify(load(`top: ${text}`)));
      }),
    );
  });
});
