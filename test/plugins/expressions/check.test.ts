import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { checkExpression } from '../../../plugins/expressions/check.ts';
import type { CheckContext } from '../../../plugins/expressions/context.ts';
import type { CheckedExpression, Fault } from '../../../plugins/expressions/expression.ts';
import { FUNCTIONS } from '../../../plugins/expressions/functions.ts';
import { parseExpression } from '../../../plugins/expressions/parse.ts';
import { siUnitText } from '../../../plugins/language/dimensions.ts';
import { context } from './surroundings.ts';

function check(text: string, more: Partial<CheckContext> = {}): { checked?: CheckedExpression; faults: Fault[] } {
  const { root, faults } = parseExpression(text);
  expect(faults).toEqual([]);
  return checkExpression(text, root!, { ...context, ...more });
}

function right(text: string, more: Partial<CheckContext> = {}): CheckedExpression {
  const { checked, faults } = check(text, more);
  expect(faults).toEqual([]);
  return checked!;
}

function wrong(
  text: string,
  more: Partial<CheckContext> = {},
): { message: string; expected?: string; example?: string; under: string } {
  const { checked, faults } = check(text, more);
  expect(checked).toBeUndefined();
  expect(faults).toHaveLength(1);
  const { span, ...words } = faults[0]!;
  return { ...words, under: text.slice(span.start, span.end) };
}

describe('kinds and dimensions', () => {
  test.each([
    ['D1.i', 'waveform', 'A'],
    ['lamp', 'waveform', 'V'],
    ['gnd', 'waveform', 'V'],
    ['time', 'waveform', 's'],
    ['D1.i @ bias', 'number', 'A'],
    ['lamp @ bias', 'number', 'V'],
    ['D1.i @ curve', 'waveform', 'A'],
    ['swept @ curve', 'waveform', 'V'],
    ['C1.q', 'waveform', 'C'],
    ['C1.energy', 'waveform', 'J'],
    ['L1.flux @ coil', 'waveform', 'Wb'],
    ['C1.value', 'number', 'F'],
    ['R1.value * C1.value', 'number', 's'],
    ['D1.rating.forward_current', 'number', 'A'],
    ['mean(D1.i)', 'number', 'A'],
    ['rms(C1.i) ^ 2 * R1.value', 'number', 'W'],
    ['integral(D1.i)', 'number', 'C'],
    ['integral(D1.i) @ curve', 'number', 'W'],
    ['derivative(C1.v)', 'waveform', 'V/s'],
    ['derivative(D1.i) @ curve', 'waveform', 'S'],
    ['slope(C1.v)', 'number', 'V/s'],
    ['at(D1.i, 5 ms)', 'number', 'A'],
    ['at(D1.i, 2 V) @ curve', 'number', 'A'],
    ['when(D1.i > 1 mA)', 'number', 's'],
    ['when(D1.i > 1 mA) @ curve', 'number', 'V'],
    ['share(D1.i > 1 mA and not C1.v < 3 V)', 'number', ''],
    ['D1.i > 1 mA', 'condition', ''],
    ['C1.value > 1 nF', 'truth', ''],
    ['D1.i > 1 mA or C1.value > 1 nF', 'condition', ''],
    ['positive(D1.i)', 'waveform', 'A'],
    ['abs(-3 V)', 'number', 'V'],
    ['sqrt(D1.v ^ 2)', 'waveform', 'V'],
    ['D1.v ^ (1/2)', 'waveform', 'V^0.5'],
    ['max(2 V, 3 V, lamp @ bias)', 'number', 'V'],
    ['exp(-time / 1 ms)', 'waveform', ''],
    ['harmonic(C1.i, 3, 20 ms)', 'number', 'A'],
    ['settling_time(C1.v, 5 %)', 'number', 's'],
    ['lamp_mean * 2', 'number', 'A'],
    ['other-note#peak', 'number', 'A'],
    ['max(D1.i) @ slow-ramp - max(D1.i) @ curve', 'number', 'A'],
    ['-D1.i', 'waveform', 'A'],
  ])('%s', (text, kind, unit) => {
    const checked = right(text);
    expect(checked.kind).toBe(kind);
    expect(siUnitText(checked.dimension)).toBe(unit);
  });

  test('every function has an example that is right', () => {
    for (const { example, name } of FUNCTIONS) {
      // L1 of an example stands in the other circuit.
      const text = example.replace('L1.value', '(1 H)');
      expect(right(text).dimension, name).toBeDefined();
      expect(example).toContain(`${name}(`);
    }
  });
});

test('names are bound to their analyses, and what is used is listed', () => {
  const checked = right('mean(D1.i - lamp_mean) + max(D1.i) @ curve + other-note#peak');
  expect(checked.analysis).toBe('slow-ramp');
  expect(checked.uses).toEqual({
    analyses: ['slow-ramp', 'curve'],
    figures: ['lamp_mean'],
    foreignFigures: [{ note: 'other-note', figure: 'peak' }],
  });
  expect(right('C1.value').resolved).toMatchObject({
    type: 'constant',
    circuit: 'lamp',
    designator: 'C1',
    path: 'value',
  });
  expect(right('L1.flux @ coil').resolved).toMatchObject({
    type: 'quantity',
    analysis: 'coil',
    quantity: { designator: 'L1', property: 'flux' },
    span: { start: 0, end: 14 },
  });
});

describe('faults', () => {
  test.each<[text: string, message: string, under: string, expected: string | undefined]>([
    [
      'D1.v + D1.i',
      '`D1.v` is a voltage and `D1.i` is a current: they cannot be added',
      'D1.v + D1.i',
      'quantities of the same dimension',
    ],
    ['D1.i > 0', '`D1.i` is a current and `0` is a plain number: they cannot be compared', '0', 'a unit of current'],
    ['D1.current', '`D1` (led) has no `current`', 'D1.current', '`D1.i` is the nearest name'],
    [
      'D1.forward_current',
      '`D1` (led) has no `forward_current`',
      'D1.forward_current',
      '`D1.rating.forward_current` is the nearest name',
    ],
    [
      'D1.rating.forward_curent',
      '`D1` (led) has no `rating.forward_curent`',
      'D1.rating.forward_curent',
      '`D1.rating.forward_current` is the nearest name',
    ],
    ['R1.q', '`R1` (resistor) has no `q`', 'R1.q', 'one of `R1.v`, `R1.i`, `R1.p` or `R1.value`'],
    ['D3.i', 'there is no component `D3` in circuit `lamp`', 'D3.i', 'one of `G1`, `R1`, `C1`, `D1` or `D2`'],
    [
      'L1.i',
      'there is no component `L1` in circuit `lamp`',
      'L1.i',
      'an analysis of circuit `relay`, which has it, after `@`',
    ],
    ['lamp.v', '`lamp.v`: `lamp` is a node', 'lamp.v', '`lamp` alone, its potential'],
    ['lamp_mean.v', '`lamp_mean.v`: `lamp_mean` is a figure', 'lamp_mean.v', '`lamp_mean` alone, its value'],
    ['2 * D1', '`D1` is a component (led), not a quantity', 'D1', undefined],
    ['lmap', 'there is no node and no figure `lmap`', 'lmap', '`lamp` is the nearest name'],
    [
      'feed',
      'there is no node and no figure `feed` for circuit `lamp`',
      'feed',
      'an analysis of circuit `relay`, which has that node, after `@`',
    ],
    ['mean', '`mean` is a function', 'mean', 'its arguments in brackets'],
    ['curve', '`curve` is an analysis, not a quantity', 'curve', 'a quantity, `@`, and the analysis'],
    ['a', '`a` is the name of a figure and of a node', 'a', undefined],
    ['swept', '`slow-ramp` is a time response, which has no `swept`', 'swept', '`time`, the axis of this analysis'],
    ['time @ bias', '`bias` is an operating point, which has no `time`', 'time', 'an analysis with an axis'],
    ['D1.i @ slow', 'there is no analysis `slow`', 'slow', undefined],
    ['D1.i @ curve-lamp', 'there is no analysis `curve-lamp`', 'curve-lamp', 'blanks around the `-` of a difference'],
    ['lamp_mean @ curve', 'nothing in `lamp_mean` is read from an analysis', 'lamp_mean @ curve', undefined],
    ['average(D1.i)', 'there is no function `average`', 'average', '`mean` is the nearest name'],
    ['RMS(D1.i)', 'there is no function `RMS`', 'RMS', '`rms` is the nearest name'],
    ['gain(lamp, line)', '`gain` is read off a frequency response, and this version solves none', 'gain', undefined],
    ['at(D1.i)', '`at` takes 2 arguments, and 1 is given', 'at(D1.i)', '`at(x, t)`'],
    ['mean()', '`mean` takes 1 argument, and none is given', 'mean()', '`mean(x)`'],
    [
      'at(D1.i, 2,5 ms)',
      '`at` takes 2 arguments, and 3 are given',
      'at(D1.i, 2,5 ms)',
      'a decimal point in place of the comma',
    ],
    [
      'settling_time()',
      '`settling_time` takes 1 or 2 arguments, and none is given',
      'settling_time()',
      '`settling_time(x, [band])`',
    ],
    ['at(D1.i, 5)', '`5` is a plain number, and a time is due for `t` of `at`', '5', 'a unit of time'],
    ['at(D1.i, 5 V)', '`5 V` is a voltage, and a time is due for `t` of `at`', '5 V', 'a time'],
    ['mean(D1.i) @ bias', '`D1.i` is one number already, and `mean` is of a quantity over an axis', 'D1.i', undefined],
    ['mean(D1.i > 1 mA)', '`D1.i > 1 mA` is a condition, and `mean` is of a quantity', 'D1.i > 1 mA', undefined],
    ['when(D1.i)', '`D1.i` is a current over an axis, and `when` is of a condition', 'D1.i', 'a comparison'],
    [
      'when(C1.value > 1 nF)',
      '`C1.value > 1 nF` compares numbers, and `when` is of a condition over an axis',
      'C1.value > 1 nF',
      undefined,
    ],
    [
      'rise_time(D1.i) @ curve',
      '`rise_time` is of a quantity over time, and `D1.i` runs over a voltage',
      'D1.i',
      'a quantity of a time response',
    ],
    [
      'max(D1.v, D2.v)',
      '`D1.v` is a voltage over an axis, and `max` of several arguments takes numbers',
      'D1.v',
      'each reduced to a number first',
    ],
    ['max(1 V, 2 A)', '`2 A` is a current, the first argument a voltage', '2 A', 'numbers of one dimension'],
    ['D1.i @ curve + D1.i', '`D1.i @ curve` runs over a voltage, `D1.i` over a time', 'D1.i @ curve + D1.i', undefined],
    ['2 ^ D1.v', 'the exponent `D1.v` is a voltage', 'D1.v', 'a plain number as exponent'],
    [
      'D1.v ^ (C1.value / 1 F)',
      '`D1.v` is a voltage, and its exponent is not written out',
      '(C1.value / 1 F)',
      undefined,
    ],
    ['ln(D1.v)', '`D1.v` is a voltage, and a plain number is due in `ln`', 'D1.v', 'a plain number'],
    ['(D1.i > 1 mA) + 2', '`(D1.i > 1 mA)` is a condition, and `+` takes quantities', '(D1.i > 1 mA)', undefined],
    ['D1.i and D2.i > 1 mA', '`D1.i` is a current over an axis, and `and` takes conditions', 'D1.i', undefined],
    ['not D1.i', '`D1.i` is a current over an axis, and `not` takes a condition', 'D1.i', 'a comparison'],
    ['-(D1.i > 1 mA)', '`(D1.i > 1 mA)` is a condition, and `-` takes a quantity', '(D1.i > 1 mA)', undefined],
    ['other#peak', 'there is no note `other`', 'other#peak', undefined],
    ['other-note#mean', 'note `other-note` has no figure `mean`', 'other-note#mean', undefined],
  ])('%s', (text, message, under, expected) => {
    const fault = wrong(text);
    expect(fault.message).toBe(message);
    expect(fault.under).toBe(under);
    if (expected !== undefined) expect(fault.expected).toBe(expected);
  });

  test('several are found at once', () => {
    expect(check('mean(D3.i) + lmap * average(D1.i)').faults).toHaveLength(3);
  });

  test('an example shows how it is written', () => {
    expect(wrong('D1.i > 1').example).toBe('1 A');
    expect(wrong('2 * D1').example).toBe('D1.v');
  });

  test('without an analysis', () => {
    const none = { analyses: [], from: undefined };
    expect(wrong('mean(D1.i)', { ...none, circuit: 'lamp' }).message).toBe(
      'there is no analysis that `D1.i` could be read from',
    );
    expect(right('C1.value', { ...none, circuit: 'lamp' }).analysis).toBeUndefined();
    expect(right('2 mA', none).kind).toBe('number');
    expect(wrong('lamp', { from: undefined, circuit: 'lamp' }).expected).toContain('`@`');
  });
});

describe('what is due', () => {
  test('a number', () => {
    const fault = wrong('D1.i', { due: 'number' });
    expect(fault.message).toBe('`D1.i` is a curve over the axis of its analysis, and one number is due');
    expect(fault.example).toBe('mean(D1.i)');
    expect(wrong('D1.i > 1 mA', { due: 'number' }).example).toBe('when(D1.i > 1 mA)');
    expect(wrong('C1.value > 1 nF', { due: 'number' }).message).toContain('true or false');
    expect(right('D1.i @ bias', { due: 'number' }).kind).toBe('number');
  });
  test('a curve', () => {
    expect(right('D1.i', { due: 'curve' }).kind).toBe('waveform');
    expect(right('2.1 V', { due: 'curve' }).kind).toBe('number');
    expect(wrong('D1.i > 1 mA', { due: 'curve' }).message).toContain('a curve is due');
  });
  test('a condition', () => {
    expect(right('D1.i > 1 mA', { due: 'condition' }).kind).toBe('condition');
    expect(wrong('D1.i', { due: 'condition' }).example).toBe('D1.i > 1 mA');
  });
  test('a dimension', () => {
    const { dimension } = right('D1.i');
    expect(right('0.8 * D1.rating.forward_current', { dimension }).kind).toBe('number');
    expect(wrong('20', { dimension })).toMatchObject({ expected: 'a unit of current', example: '20 A' });
    expect(wrong('2 V', { dimension }).message).toBe('`2 V` is a voltage, and a current is due');
  });
});

test('any tree is checked without an exception, and a checked one can be written down', () => {
  const pieces = [
    'D1.i',
    'lamp',
    'C1.value',
    'a',
    'mean(',
    'max(',
    'at(',
    'when(',
    'share(',
    ')',
    ',',
    '+',
    '*',
    '^',
    '<',
    'and',
    'not',
    '2 mA',
    '3',
    '@ curve',
    '@ bias',
  ];
  let checkedCount = 0;
  fc.assert(
    fc.property(fc.array(fc.constantFrom(...pieces), { minLength: 1, maxLength: 9 }), (all) => {
      const text = all.join(' ');
      const { root } = parseExpression(text);
      if (!root) return;
      const { checked, faults } = checkExpression(text, root, context);
      expect(checked === undefined).toBe(faults.length > 0);
      if (checked) checkedCount++;
      if (checked) expect(JSON.parse(JSON.stringify(checked))).toEqual(checked);
      for (const { span } of faults) expect(span.end).toBeGreaterThan(span.start);
    }),
    { numRuns: 3000, seed: 1 },
  );
  expect(checkedCount).toBeGreaterThan(10);
});
