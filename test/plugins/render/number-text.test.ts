import { describe, expect, test } from 'vitest';
import { parseUnit } from '../../../plugins/language/units.ts';
import {
  alignedAtPoint,
  limitText,
  numberText,
  quantityText,
  supportedDigits,
  typographic,
  typographicWords,
} from '../../../plugins/render/number-text.ts';

const milliampere = parseUnit('mA')!;
const exactly = (value: number) => ({ value, uncertainty: 0 });

describe('digits', () => {
  test('three significant ones where nothing else is asked', () => {
    expect(numberText(exactly(0.0123456), milliampere)).toBe('12.3');
    expect(numberText(exactly(0.002), milliampere)).toBe('2.00');
  });

  test('as many as are asked for', () => {
    expect(numberText(exactly(0.0123456), milliampere, 5)).toBe('12.346');
    expect(numberText(exactly(0.0123456), milliampere, 1)).toBe('10');
  });

  // a digit is printed only where half a unit of its place is not below the uncertainty: 12.3456 ± 0.04 has one decimal
  test('never more than the uncertainty supports', () => {
    expect(numberText({ value: 12.3456e-3, uncertainty: 0.04e-3 }, milliampere, 8)).toBe('12.3');
    expect(numberText({ value: 12.3456e-3, uncertainty: 0.4e-3 }, milliampere, 8)).toBe('12');
    expect(numberText({ value: 12.3456e-3, uncertainty: 0.004e-3 }, milliampere, 8)).toBe('12.35');
  });

  test('a value that drowns in its uncertainty is zero', () => {
    expect(numberText({ value: 1e-9, uncertainty: 1e-8 }, milliampere)).toBe('0');
    expect(numberText(exactly(0), milliampere)).toBe('0');
    expect(supportedDigits({ value: 1e-9, uncertainty: 1e-8 })).toBe(0);
  });
});

test('the minus is a minus, and number and unit do not part', () => {
  expect(quantityText(exactly(-0.0021), milliampere)).toBe('\u22122.10\u00a0mA');
  expect(typographic('-1.5')).toBe('\u22121.5');
  expect(quantityText(exactly(0.5), parseUnit('1')!)).toMatch(/^0\.500/);
});

test('a limit has the digits that it needs', () => {
  expect(limitText(0.02, milliampere)).toBe('20');
  expect(limitText(0.0025, milliampere)).toBe('2.5');
});

test('decimal points of a column stand under each other', () => {
  const aligned = alignedAtPoint(['1.50', '30.0', '120', '\u22120.1', '–', '']);
  // what stands behind the point, or behind the last digit, is as wide in every row
  const behind = (text: string): number => text.length - (text.search(/[.\u2008]/) + 1);
  expect(aligned.slice(0, 4).map(behind)).toEqual([2, 2, 2, 2]);
  expect(aligned.slice(4)).toEqual(['–', '']);
  expect(aligned.map((text) => Number(text.replace('\u2212', '-'))).slice(0, 4)).toEqual([1.5, 30, 120, -0.1]);
  expect(alignedAtPoint(['1', '20'])).toEqual(['1', '20']);
});

test('numbers within words', () => {
  expect(typographicWords('T = 25, -20, 60 °C; low -34 V, a-1')).toBe(
    'T = 25, \u221220, 60\u00a0°C; low \u221234 V, a-1',
  );
});
