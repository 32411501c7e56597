import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import * as dues from '../../../plugins/language/dues.ts';
import { type Due, parseScalar, readQuantityAt, type ScalarFault } from '../../../plugins/language/scalar.ts';
import { PREFIXES } from '../../../plugins/language/units.ts';

const RESISTOR: Due = { ...dues.RESISTANCE, example: '47 Ω', tolerance: true };
const CAPACITOR: Due = { ...dues.CAPACITANCE, tolerance: true };
const SOURCE: Due = { ...dues.VOLTAGE, tolerance: true };

function read(text: string, due: Due) {
  const reading = parseScalar(text, due);
  if (!reading.ok) throw new Error(`${text}: ${reading.fault.message}`);
  return reading.scalar;
}

function fault(text: string, due: Due): ScalarFault {
  const reading = parseScalar(text, due);
  if (reading.ok) throw new Error(`${text} was read as ${reading.scalar.value}`);
  return reading.fault;
}

describe('values', () => {
  test.each([
    ['47 Ω', 47],
    ['47Ω', 47],
    ['4.7kΩ', 4700],
    ['  47   ohm ', 47],
    ['1e3 Ω', 1000],
    ['1E+3 Ω', 1000],
    ['.5 Ω', 0.5],
    ['5. Ω', 5],
    ['4.7\u00a0kΩ', 4700],
  ])('%s', (text, value) => {
    expect(read(text, RESISTOR).value).toBe(value);
  });

  test('signs, of which the typographic minus is one', () => {
    expect(read('-3 V', SOURCE).value).toBe(-3);
    expect(read('−3 V', SOURCE).value).toBe(-3);
    expect(read('+3 V', SOURCE).value).toBe(3);
  });

  test('temperatures', () => {
    expect(read('-20 °C', dues.TEMPERATURE).value).toBeCloseTo(253.15, 10);
    expect(read('300 K', dues.TEMPERATURE).value).toBe(300);
    expect(fault('5 °C', { ...dues.TEMPERATURE, difference: true, example: '5 K' }).message).toContain('a difference');
  });

  test('plain numbers where a number is due, angles only with a unit', () => {
    expect(read('1.8', dues.NUMBER).value).toBe(1.8);
    expect(read('5 %', dues.FRACTION).value).toBe(0.05);
    expect(read('90°', dues.ANGLE).value).toBeCloseTo(Math.PI / 2, 15);
    expect(fault('90', dues.ANGLE).message).toContain('no unit');
  });

  test('any value in any prefix comes back', () => {
    const prefixes = fc.constantFrom('', ...PREFIXES.keys());
    // Subnormal numbers have fewer digits than the comparison asks for.
    const numbers = fc
      .double({ min: -1e6, max: 1e6, noNaN: true })
      .filter((number) => number === 0 || Math.abs(number) > 1e-200);
    fc.assert(
      fc.property(numbers, prefixes, fc.constantFrom('', ' '), (number, prefix, blank) => {
        const expected = number * 10 ** (PREFIXES.get(prefix) ?? 0);
        const { value } = read(`${number}${blank}${prefix}V`, SOURCE);
        expect(Math.abs(value - expected)).toBeLessThanOrEqual(1e-15 * Math.abs(expected));
      }),
    );
  });
});

describe('tolerances', () => {
  test.each([
    ['47 Ω ±10 %', 0.1, -0.1],
    ['47 Ω +/-10%', 0.1, -0.1],
    ['47 Ω ± 4.7 Ω', 0.1, -0.1],
    ['47 Ω ±100 ppm', 1e-4, -1e-4],
    ['47 Ω +50 -20 %', 0.5, -0.2],
    ['47 Ω -20 +50 %', 0.5, -0.2],
    ['47 Ω +50% -20%', 0.5, -0.2],
    ['47 Ω +50/-20 %', 0.5, -0.2],
    ['4k7 ±1 %', 0.01, -0.01],
  ])('%s', (text, plus, minus) => {
    const { tolerance } = read(text, RESISTOR);
    expect(tolerance!.plus).toBeCloseTo(plus, 14);
    expect(tolerance!.minus).toBeCloseTo(minus, 14);
  });

  test.each(['47 Ω ±5', '47 Ω ±5 V', '47 Ω ±', '47 Ω +5 +5 %', '47 Ω ± x %'])('%s is refused', (text) => {
    expect(fault(text, RESISTOR).expected).toContain('±');
  });

  test('where none is due, one is refused', () => {
    expect(fault('5 V ±5 %', dues.VOLTAGE)).toMatchObject({ start: 4, end: 8 });
  });
});

describe('what is wrong is said with its place', () => {
  test.each<[string, Due, string, string]>([
    ['5 V', RESISTOR, 'a resistance (Ω) is due, `5 V` is a voltage', '47 Ω'],
    ['100', RESISTOR, '`100` has no unit', '47 Ω'],
    ['4,7 kΩ', RESISTOR, 'decimal comma', '4.7 kΩ'],
    ['50 Mhz', dues.FREQUENCY, 'case-sensitive', '50 MHz'],
    ['10 uf', CAPACITOR, 'case-sensitive', '10 µF'],
    ['5 KΩ', RESISTOR, 'case-sensitive', '5 kΩ'],
    ['10 ohms', RESISTOR, '`ohms` is not a unit', '10 Ω'],
    ['5 volts', SOURCE, '`volts` is not a unit', '5 V'],
    ['4.7 K', RESISTOR, 'is a temperature', '4.7 kΩ'],
    ['20 S', dues.TIME, 'is a conductance', '20 s'],
    ['1 000 Ω', RESISTOR, 'two numbers', '47 Ω'],
    ['', RESISTOR, 'nothing is written', '47 Ω'],
    ['much', RESISTOR, 'does not begin with a number', '47 Ω'],
    ['NaN Ω', RESISTOR, 'does not begin with a number', '47 Ω'],
    ['1e999 Ω', RESISTOR, 'does not begin with a number', '47 Ω'],
    ['5 furlong', RESISTOR, '`furlong` is not a unit', '47 Ω'],
  ])('%s', (text, due, message, expected) => {
    const found = fault(text, due);
    expect(found.message).toContain(message);
    expect(found.expected).toContain(expected);
  });

  test('the range is within the text, whatever it is', () => {
    const pieces = fc.array(
      fc.constantFrom('4', '7', '.', ',', 'k', 'M', 'µ', 'Ω', 'V', ' ', '±', '+', '-', '/', '%', 'e', '°C', 'x'),
      {
        maxLength: 12,
      },
    );
    const texts = fc.oneof(
      pieces.map((list) => list.join('')),
      fc.string({ unit: 'binary', maxLength: 20 }),
    );
    fc.assert(
      fc.property(texts, fc.constantFrom(RESISTOR, CAPACITOR, SOURCE, dues.ANGLE), (text, due) => {
        const reading = parseScalar(text, due);
        if (reading.ok) {
          expect(Number.isFinite(reading.scalar.value)).toBe(true);
          return;
        }
        const { start, end } = reading.fault;
        expect(start).toBeGreaterThanOrEqual(0);
        expect(end).toBeGreaterThan(start);
        expect(start).toBeLessThanOrEqual(text.length);
        expect(end).toBeLessThanOrEqual(text.length + 1);
      }),
      { numRuns: 500 },
    );
  });
});

describe('quantities in expressions', () => {
  test.each([
    ['2.5 mA * R1.value', 0.0025, 6],
    ['2.5mA', 0.0025, 5],
    ['2 and x', 2, 1],
    ['3 * x', 3, 1],
    ['5 % of', 0.05, 3],
    ['1e-9 F)', 1e-9, 6],
    ['5 V/C1.v', 5, 3],
  ])('%s', (text, value, end) => {
    const found = readQuantityAt(text, 0)!;
    expect(found.value).toBeCloseTo(value, 15);
    expect(found.end).toBe(end);
  });

  test('nothing where no number begins', () => {
    expect(readQuantityAt('x', 0)).toBeUndefined();
  });
});
