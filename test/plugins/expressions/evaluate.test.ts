import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { checkExpression } from '../../../plugins/expressions/check.ts';
import { type Evaluation, evaluateExpression, type Scope } from '../../../plugins/expressions/evaluate.ts';
import { FUNCTIONS } from '../../../plugins/expressions/functions.ts';
import { parseExpression } from '../../../plugins/expressions/parse.ts';
import type { IntervalSet } from '../../../solver/waveform/interval-set.ts';
import { valueAt } from '../../../solver/waveform/value-at.ts';
import type { Waveform } from '../../../solver/waveform/waveform.ts';
import { sampleSmooth, uniformGrid } from '../../solver/waveform/sample.ts';
import { context } from './surroundings.ts';

// One period of 50 Hz: D1.i = 10 mA sin, C1.v = 5 V sin, everything else zero; bias: 2 V and 3 mA everywhere.
const grid = uniformGrid(0, 0.02, 400);
const sine = (peak: number): Waveform => sampleSmooth(grid, (t) => peak * Math.sin(100 * Math.PI * t));
const curveGrid = uniformGrid(-5, 5, 10);
const scope: Scope = {
  read: (analysis, quantity) => {
    if (analysis === 'bias') return 'designator' in quantity && quantity.property === 'i' ? 3e-3 : 2;
    if (analysis === 'curve') return sampleSmooth(curveGrid, (v) => ('axis' in quantity ? v : 1e-3 * v ** 2));
    if ('axis' in quantity) return sampleSmooth(grid, (t) => t);
    if ('node' in quantity) return sine(quantity.node === 'lamp' ? 2 : 0);
    if (quantity.designator === 'D1') return sine(quantity.property === 'i' ? 10e-3 : 2);
    return sine(quantity.designator === 'C1' && quantity.property === 'v' ? 5 : 0);
  },
  constant: (_circuit, designator, path) =>
    context.circuits[0]!.components.find((component) => component.designator === designator)!.data!.get(path)!.value,
  figure: (name, note) => (note === undefined && name === 'lamp_mean' ? 4e-3 : undefined),
};

function evaluate(text: string): Evaluation {
  const { root } = parseExpression(text);
  const { checked, faults } = checkExpression(text, root!, context);
  expect(faults).toEqual([]);
  return evaluateExpression(checked!, scope);
}

function value(text: string): number | Waveform | IntervalSet | boolean {
  const outcome = evaluate(text);
  if (!outcome.ok) throw new Error(outcome.reason);
  return outcome.value;
}

describe('numbers', () => {
  // Expected values are the closed forms of a sine: mean of a half wave 1/π, RMS 1/√2, above half its peak for a third.
  test.each<[string, number]>([
    ['mean(D1.i)', 0],
    ['mean(positive(D1.i))', 10e-3 / Math.PI],
    ['mean(negative(D1.i))', -10e-3 / Math.PI],
    ['mean(abs(D1.i))', 20e-3 / Math.PI],
    ['rms(D1.i)', 10e-3 * Math.SQRT1_2],
    ['max(D1.i)', 10e-3],
    ['min(D1.i)', -10e-3],
    ['peak(C1.v)', 5],
    ['span(C1.v)', 10],
    ['integral(positive(D1.i))', (10e-3 * 0.02) / Math.PI],
    ['at(C1.v, 5 ms)', 5],
    ['at(C1.v, 20 ms)', 0],
    ['at(D1.i, 2 V) @ curve', 4e-3],
    ['when(D1.i > 5 mA)', 0.02 / 3],
    ['share(D1.i > 5 mA or D1.i < -5 mA)', 2 / 3],
    ['share(not (D1.i > 5 mA))', 2 / 3],
    ['first(D1.i > 5 mA)', 0.02 / 12],
    ['last(D1.i > 5 mA)', 0.1 / 12],
    ['share(D1.i > 0 A and C1.value > 1 nF)', 0.5],
    ['share(D1.i > 0 A and C1.value > 1 F)', 0],
    ['harmonic(D1.i, 1)', 10e-3],
    ['harmonic(D1.i, 1, 20 ms)', 10e-3],
    ['distortion(D1.i)', 0],
    ['max(derivative(C1.v))', 5 * 100 * Math.PI],
    ['slope(C1.v, 10 ms)', -5 * 100 * Math.PI],
    ['mean(D1.v * D1.i)', 10e-3],
    ['mean(C1.v - 1 V)', -1],
    ['max(2 V - C1.v)', 7],
    ['max(time)', 0.02],
    ['mean(swept) @ curve', 0],
    ['R1.value * C1.value', 47e-6],
    ['0.8 * D1.rating.forward_current', 16e-3],
    ['D1.i @ bias * 2', 6e-3],
    ['lamp_mean / 2', 2e-3],
    ['max(1 V, lamp @ bias, 1.5 V)', 2],
    ['min(1 V, lamp @ bias, 1.5 V)', 1],
    ['sqrt(4) + ln(exp(2)) + log10(1000) + abs(-1)', 8],
    ['mean(sqrt(C1.v ^ 2)) - mean(abs(C1.v))', 0],
    ['-2 ^ 2', -4],
    ['2 ^ -1', 0.5],
    ['10 - 2 - 3', 5],
    ['-20 °C', 253.15],
  ])('%s', (text, expected) => {
    expect(Math.abs((value(text) as number) - expected)).toBeLessThan(2e-7 * Math.max(1e-3, Math.abs(expected)));
  });
});

test('curves', () => {
  const product = value('D1.i * R1.value') as Waveform;
  expect(product.grid).toBe(grid);
  expect(valueAt(product, 0.005)).toBeCloseTo(0.47, 9);
});

test('conditions and truths', () => {
  const set = value('D1.i > 5 mA') as IntervalSet;
  expect(set.starts).toHaveLength(1);
  expect(set.to).toBe(0.02);
  expect(value('C1.value > 1 nF')).toBe(true);
  expect(value('not C1.value > 1 nF or 1 V == 2 V')).toBe(false);
});

describe('no value', () => {
  test.each([
    ['1 / (2 - 2)', 'a division by zero', '1 / (2 - 2)'],
    ['2 + sqrt(0 - 1)', 'the square root of a negative number', 'sqrt(0 - 1)'],
    ['ln(0)', 'the logarithm of a number that is not above zero', 'ln(0)'],
    ['(0 - 2) ^ 0.5', 'a root of a negative number', '(0 - 2) ^ 0.5'],
    ['10 ^ 400', 'the result is infinite', '10 ^ 400'],
    ['first(D1.i > 1 A)', 'the condition never holds', 'first(D1.i > 1 A)'],
    ['at(C1.v, 1 s)', '1.000 s lies outside what is kept, 0 s to 20.00 ms', 'at(C1.v, 1 s)'],
    ['overshoot(D1.i)', 'the first and the last value are the same', 'overshoot(D1.i)'],
    ['harmonic(D1.i, 1.5)', 'the number of a harmonic is a whole number from 0', 'harmonic(D1.i, 1.5)'],
    ['C1.v / G1.i', 'the quantity is undefined on the whole axis', 'C1.v / G1.i'],
    ['other-note#peak', 'figure `other-note#peak` has no value', 'other-note#peak'],
  ])('%s', (text, reason, under) => {
    const outcome = evaluate(text);
    expect(outcome).toMatchObject({ ok: false, reason });
    if (!outcome.ok) expect(text.slice(outcome.span.start, outcome.span.end)).toBe(under);
  });

  test('a divisor that passes through zero', () => {
    const outcome = evaluate('mean(C1.v / D1.i)');
    expect(outcome).toMatchObject({ ok: false, span: { start: 5, end: 16 } });
    expect(!outcome.ok && outcome.reason).toContain('a divisor passes through zero');
    expect(value('at(C1.v / D1.i, 5 ms)')).toBeCloseTo(500, 9);
  });
});

test('whatever passes the checker is evaluated without an exception, and its numbers are finite', () => {
  const { text } = fc.letrec<{ text: string }>((tie) => ({
    text: fc.oneof(
      { depthSize: 'small' },
      fc.constantFrom('D1.i', 'lamp', 'D1.v', 'C1.value', 'lamp_mean', '2', '0', '-1', '5 ms', '1 mA', '2 V', 'time'),
      fc
        .tuple(
          fc.constantFrom(...FUNCTIONS.map(({ name }) => name)),
          fc.array(tie('text'), { minLength: 1, maxLength: 2 }),
        )
        .map(([name, operands]) => `${name}(${operands.join(', ')})`),
      fc
        .tuple(tie('text'), fc.constantFrom('+', '-', '*', '/', '^', '<', '>=', '==', '!=', 'and', 'or'), tie('text'))
        .map(([left, operator, right]) => `(${left} ${operator} ${right})`),
      tie('text').map((operand) => `(not ${operand})`),
      fc
        .tuple(tie('text'), fc.constantFrom('curve', 'bias'))
        .map(([operand, analysis]) => `(${operand}) @ ${analysis}`),
    ),
  }));
  const kinds = new Set<string>();
  fc.assert(
    fc.property(text, (written) => {
      const { root } = parseExpression(written);
      const { checked } = root ? checkExpression(written, root, context) : {};
      if (!checked) return;
      const outcome = evaluateExpression(checked, scope);
      kinds.add(checked.kind);
      if (!outcome.ok) expect(outcome.reason).not.toBe('');
      else if (checked.kind === 'number') expect(outcome.value).toSatisfy(Number.isFinite);
      else if (checked.kind === 'waveform') expect(outcome.value).toHaveProperty('values');
      else if (checked.kind === 'condition') expect(outcome.value).toHaveProperty('starts');
      else expect(outcome.value).toBeTypeOf('boolean');
    }),
    { numRuns: 5000 },
  );
  expect([...kinds].sort()).toEqual(['condition', 'number', 'truth', 'waveform']);
});
