import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { ExpressionNode } from '../../../plugins/expressions/expression.ts';
import { parseExpression } from '../../../plugins/expressions/parse.ts';
import { printExpression } from '../../../plugins/expressions/print.ts';
import { CURRENT, DIMENSIONLESS, RESISTANCE, VOLTAGE } from '../../../plugins/language/dimensions.ts';

/** The tree as nested lists, for reading. */
function shape(node: ExpressionNode): unknown {
  switch (node.type) {
    case 'number':
      return node.value;
    case 'name':
      return node.name;
    case 'member':
      return [node.object, ...node.path].join('.');
    case 'foreign':
      return `${node.note}#${node.figure}`;
    case 'call':
      return [node.function, ...node.arguments.map(shape)];
    case 'unary':
      return [node.operator, shape(node.operand)];
    case 'binary':
      return [node.operator, shape(node.left), shape(node.right)];
    case 'from':
      return ['@', shape(node.operand), node.analysis];
  }
}

function read(text: string): unknown {
  const { root, faults } = parseExpression(text);
  expect(faults).toEqual([]);
  return shape(root!);
}

function faultOf(text: string): { message: string; expected?: string; example?: string; under: string } {
  const { root, faults } = parseExpression(text);
  expect(root).toBeUndefined();
  expect(faults).toHaveLength(1);
  const { span, ...words } = faults[0]!;
  return { ...words, under: text.slice(span.start, span.end) };
}

describe('operators', () => {
  test.each([
    ['a + b * c', ['+', 'a', ['*', 'b', 'c']]],
    ['a - b - c', ['-', ['-', 'a', 'b'], 'c']],
    ['a / b / c', ['/', ['/', 'a', 'b'], 'c']],
    ['(a + b) * c', ['*', ['+', 'a', 'b'], 'c']],
    ['2 ^ 3 ^ x', ['^', 2, ['^', 3, 'x']]],
    ['-a ^ 2', ['-', ['^', 'a', 2]]],
    ['a ^ -2', ['^', 'a', ['-', 2]]],
    ['-a * b', ['*', ['-', 'a'], 'b']],
    ['a - -b', ['-', 'a', ['-', 'b']]],
    ['+a', 'a'],
    ['a > b and c < d or e == f', ['or', ['and', ['>', 'a', 'b'], ['<', 'c', 'd']], ['==', 'e', 'f']]],
    ['not a > b and c', ['and', ['not', ['>', 'a', 'b']], 'c']],
    ['a + b > c * d', ['>', ['+', 'a', 'b'], ['*', 'c', 'd']]],
    ['a ≤ b', ['<=', 'a', 'b']],
    ['a − b × c', ['-', 'a', ['*', 'b', 'c']]],
    ['mean(D1.i) @ steady', ['@', ['mean', 'D1.i'], 'steady']],
    ['D1.i @ steady * 2', ['*', ['@', 'D1.i', 'steady'], 2]],
    ['-x @ a ^ 2', ['-', ['^', ['@', 'x', 'a'], 2]]],
    ['x @ slow-ramp - y @ a-1', ['-', ['@', 'x', 'slow-ramp'], ['@', 'y', 'a-1']]],
    ['at(G1.v, 5 ms)', ['at', 'G1.v', 0.005]],
    ['Q1.collector.i', 'Q1.collector.i'],
    ['D1.rating.forward_current', 'D1.rating.forward_current'],
    ['other-note#lamp_mean * 2', ['*', 'other-note#lamp_mean', 2]],
    ['2024-07.lamp#mean_1', '2024-07.lamp#mean_1'],
    ['f()', ['f']],
  ])('%s', (text, expected) => {
    expect(read(text)).toEqual(expected);
  });
});

describe('numbers', () => {
  test.each([
    ['2.5 mA', 2.5e-3, CURRENT],
    ['2.5mA', 2.5e-3, CURRENT],
    ['1e-3 A', 1e-3, CURRENT],
    ['.5 V', 0.5, VOLTAGE],
    ['47 Ω', 47, RESISTANCE],
    ['50 %', 0.5, DIMENSIONLESS],
    ['12', 12, DIMENSIONLESS],
    ['-20 °C', 253.15, undefined],
  ])('%s', (text, value, dimension) => {
    const { root } = parseExpression(text);
    expect(root).toMatchObject({ type: 'number', span: { start: 0, end: text.length } });
    expect(root!.type === 'number' && root!.value).toBeCloseTo(value, 12);
    if (dimension) expect(root).toMatchObject({ dimension });
  });

  test('a level in decibel keeps its sign: -20 dB is a tenth', () => {
    expect(read('-20 dB')).toBeCloseTo(0.1, 12);
  });

  test('a unit does not swallow what follows it', () => {
    expect(read('5 V/C1.v')).toEqual(['/', 5, 'C1.v']);
    expect(read('2 A * x')).toEqual(['*', 2, 'x']);
    expect(read('x-3 V')).toEqual(['-', 'x', 3]);
    expect(read('1 V < x and 2 V > y')).toEqual(['and', ['<', 1, 'x'], ['>', 2, 'y']]);
  });
});

test('spans point at the text', () => {
  const text = ' 2 * max( D1.v ) @ steady';
  const { root } = parseExpression(text);
  const spans: string[] = [];
  const visit = (node: ExpressionNode): void => {
    spans.push(text.slice(node.span.start, node.span.end));
    if (node.type === 'binary') for (const child of [node.left, node.right]) visit(child);
    else if (node.type === 'call') node.arguments.forEach(visit);
    else if (node.type === 'from' || node.type === 'unary') visit(node.operand);
  };
  visit(root!);
  expect(spans).toEqual(['2 * max( D1.v ) @ steady', '2', 'max( D1.v ) @ steady', 'max( D1.v )', 'D1.v']);
});

describe('mistakes', () => {
  test.each([
    ['', 'the expression is empty', ''],
    ['   ', 'the expression is empty', ' '],
    ['D1.i = 2 mA', '`=` is not a sign of expressions', '='],
    ['a > b && c > d', '`&&` is not a sign of expressions', '&&'],
    ['max(a && b)', '`&&` is not a sign of expressions', '&&'],
    ['a || b', '`||` is not a sign of expressions', '||'],
    ['!a', '`!` is not a sign of expressions', '!'],
    ['a ** 2', '`**` is not a sign of expressions', '**'],
    ['mean(D1.i', 'this bracket is not closed', '('],
    ['mean(D1.i))', 'a `)` closes no bracket', ')'],
    ['(a + b', 'this bracket is not closed', '('],
    ['2,5 mA', '`2,5 mA` has a comma', '2,5 mA'],
    ['2.5 ma', '`ma` is not a unit', 'ma'],
    ['3 volts', '`volts` is not a unit', 'volts'],
    ['3foo', '`foo` is not a unit', 'foo'],
    ['2 foo', '`foo` follows a number, and is no unit', 'foo'],
    ['a b', '`b` stands where an operator or the end is due', 'b'],
    ['a +', 'the expression ends where a quantity is due', ''],
    ['a + * b', '`*` stands where a quantity is due', '*'],
    ['a < b < c', 'a comparison follows a comparison', '<'],
    ['D1.i.', 'the expression ends after `D1.i.`', ''],
    ['D1.', 'the expression ends after `D1.`', ''],
    ['D1.5', '`.5` stands where an operator or the end is due', '.5'],
    ['D1.i(2)', '`D1.i` is followed by a bracket, but a property is not called', 'D1.i'],
    ['x @', 'the expression ends where the name of an analysis is due', ''],
    ['x @ a @ b', 'a second `@` follows', '@'],
    ['1e999', '`1e999` is too large a number', '1e999'],
    ['x € y', '`€` has no meaning in an expression', '€'],
    ['a, b', 'a comma stands outside a call', ','],
    ['and b', '`and` stands where a quantity is due', 'and'],
    ['a == not b', '`not` stands behind an operator that binds more tightly', 'not'],
  ])('%s', (text, message, under) => {
    const fault = faultOf(text);
    expect(fault.message).toBe(message);
    expect(fault.under).toBe(under);
  });

  test('name what takes their place', () => {
    expect(faultOf('a = b').expected).toBe('`==` to compare');
    expect(faultOf('2,5 mA').example).toBe('2.5 mA');
    expect(faultOf('2.5 ma').expected).toContain('`mA`');
    expect(faultOf('a < b < c').example).toBe('a < b and b < c');
  });
});

describe('long texts', () => {
  const within = (text: string): void => {
    const started = performance.now();
    const { faults } = parseExpression(text);
    expect(faults).toHaveLength(1);
    expect(performance.now() - started).toBeLessThan(1000);
  };
  test.each(['(', '-', 'not ', 'a+', 'f(', 'a-', '1 ', 'a.', 'x @ a ', '2^', 'a#', '9', '\u00a0', '((a)'])(
    'of %s neither hang nor overflow',
    (piece) => {
      within(piece.repeat(Math.ceil(100_000 / piece.length)));
      within(piece.repeat(Math.floor(9_990 / piece.length)));
    },
  );
});

/** Trees that the language can express. */
const name = fc.constantFrom('a', 'b_2', 'lamp', 'x9');
const span = { start: 0, end: 0 };
const leaf: fc.Arbitrary<ExpressionNode> = fc.oneof(
  fc.record({
    type: fc.constant('number' as const),
    value: fc.double({ min: 0, max: 1e12, noNaN: true }).map((value) => value + 0),
    dimension: fc.constantFrom(DIMENSIONLESS, CURRENT, VOLTAGE, RESISTANCE),
    span: fc.constant(span),
  }),
  name.map((text) => ({ type: 'name' as const, name: text, span })),
  fc.tuple(name, fc.array(name, { minLength: 1, maxLength: 2 })).map(([object, path]) => ({
    type: 'member' as const,
    object,
    path,
    span,
  })),
  name.map((figure) => ({ type: 'foreign' as const, note: 'other-note', figure, span })),
);
const tree = fc.letrec<{ node: ExpressionNode }>((tie) => ({
  node: fc.oneof(
    { depthSize: 'small', withCrossShrink: true },
    leaf,
    fc.record({
      type: fc.constant('binary' as const),
      operator: fc.constantFrom('+', '-', '*', '/', '^', '<', '<=', '>', '>=', '==', '!=', 'and', 'or'),
      left: tie('node'),
      right: tie('node'),
      span: fc.constant(span),
    }) as fc.Arbitrary<ExpressionNode>,
    fc.record({
      type: fc.constant('unary' as const),
      operator: fc.constantFrom('-' as const, 'not' as const),
      operand: tie('node'),
      span: fc.constant(span),
    }),
    fc.record({
      type: fc.constant('call' as const),
      function: fc.constantFrom('mean', 'at'),
      arguments: fc.array(tie('node'), { maxLength: 3 }),
      span: fc.constant(span),
    }),
    fc
      .record({
        type: fc.constant('from' as const),
        operand: tie('node'),
        analysis: fc.constantFrom('steady', 'slow-ramp'),
        span: fc.constant(span),
      })
      .filter(({ operand }) => operand.type !== 'from'),
  ),
})).node;

function bare(node: ExpressionNode): unknown {
  return JSON.parse(JSON.stringify(node, (key, value) => (key === 'span' ? undefined : value)));
}

describe('for any', () => {
  test('tree: printed and read again it is the same', () => {
    fc.assert(
      fc.property(tree, (node) => {
        const { root, faults } = parseExpression(printExpression(node));
        expect(faults).toEqual([]);
        expect(bare(root!)).toEqual(bare(node));
      }),
      { numRuns: 1000 },
    );
  });

  test('text: there is a tree or one fault within it, never an exception', () => {
    const pieces = fc.constantFrom(
      ...'a D1.i ( ) , . @ + - * / ^ < <= == = not and or 2 mA 5 °C # & \n'.split(' '),
      ' ',
    );
    const anyText = fc.oneof(
      fc.string({ unit: 'binary' }),
      fc.array(pieces, { maxLength: 20 }).map((all) => all.join('')),
    );
    fc.assert(
      fc.property(anyText, (text) => {
        const { root, faults } = parseExpression(text);
        expect(faults).toHaveLength(root ? 0 : 1);
        if (root) return;
        const [{ span: range }] = faults as [(typeof faults)[0]];
        expect(range.start).toBeGreaterThanOrEqual(0);
        expect(range.start).toBeLessThanOrEqual(text.length);
        expect(range.end).toBeGreaterThan(range.start);
      }),
      { numRuns: 2000 },
    );
  });
});
