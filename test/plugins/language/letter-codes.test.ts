import { describe, expect, test } from 'vitest';
import { parseLetterCode } from '../../../plugins/language/letter-codes.ts';

function value(text: string, unit: 'Ω' | 'F' | 'H'): number | undefined {
  const code = parseLetterCode(text, unit);
  return code?.value;
}

function tolerance(text: string, unit: 'Ω' | 'F'): readonly [plus: number, minus: number] | undefined {
  const code = parseLetterCode(text, unit);
  if (code?.reading !== 'value' || !code.tolerance) return undefined;
  // In percent, rounded to what the standard prints.
  const percent = (deviation: number) => Number((deviation * 100).toPrecision(10));
  return [percent(code.tolerance.plus), percent(code.tolerance.minus)];
}

describe('value codes of IEC 60062', () => {
  // Examples of IEC 60062:2016, as reprinted in public articles on the code.
  test.each([
    ['R47', 0.47],
    ['4R7', 4.7],
    ['470R', 470],
    ['4K7', 4700],
    ['47K', 47000],
    ['47K3', 47300],
    ['470K', 470000],
    ['4M7', 4.7e6],
  ])('resistance %s', (code, ohms) => {
    expect(value(code, 'Ω')).toBe(ohms);
  });

  // From memory of the same standard.
  test.each([
    ['p10', 0.1e-12],
    ['1p5', 1.5e-12],
    ['332p', 332e-12],
    ['3n32', 3.32e-9],
    ['10n', 10e-9],
    ['2u2', 2.2e-6],
    ['2µ2', 2.2e-6],
    ['4m7', 4.7e-3],
    ['100n', 100e-9],
  ])('capacitance %s', (code, farads) => {
    expect(value(code, 'F')).toBe(farads);
  });

  test('lower case k, as designers write it, and megohms with a zero', () => {
    expect(value('4k7', 'Ω')).toBe(4700);
    expect(value('1M0', 'Ω')).toBe(1e6);
    expect(value('100u', 'H')).toBe(100e-6);
  });

  test.each(['47', 'K', '4X7', '4k7k7', '-4k7', '4 k7', 'Kk', '100F', ''])('%s is no code', (text) => {
    expect(parseLetterCode(text, 'F')).toBeUndefined();
  });
});

describe('tolerance letters of IEC 60062', () => {
  // B, C, D, F, G, J, K, M, N, Z as printed in manufacturers' guides; E, L, P, W, H, Q, S, T from memory of the standard.
  test.each([
    ['E', 0.005],
    ['L', 0.01],
    ['P', 0.02],
    ['W', 0.05],
    ['B', 0.1],
    ['C', 0.25],
    ['D', 0.5],
    ['F', 1],
    ['G', 2],
    ['H', 3],
    ['J', 5],
    ['K', 10],
    ['M', 20],
    ['N', 30],
  ])('%s', (letter, percent) => {
    expect(tolerance(`4k7${letter}`, 'Ω')).toEqual([percent, -percent]);
  });

  test.each([
    ['Q', 30, -10],
    ['T', 50, -10],
    ['S', 50, -20],
    ['Z', 80, -20],
  ])('%s', (letter, plus, minus) => {
    expect(tolerance(`100n${letter}`, 'F')).toEqual([plus, minus]);
  });

  test('below 10 pF a letter is absolute: C is 0.25 pF', () => {
    expect(tolerance('5p0C', 'F')).toEqual([5, -5]);
    expect(tolerance('50pC', 'F')).toEqual([0.25, -0.25]);
  });

  test('a letter that is also the unit is ambiguous', () => {
    expect(parseLetterCode('4n7F', 'F')?.reading).toBe('ambiguous');
    expect(parseLetterCode('4u7H', 'H')?.reading).toBe('ambiguous');
    expect(tolerance('4k7F', 'Ω')).toEqual([1, -1]);
  });
});
