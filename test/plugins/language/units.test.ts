import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  CAPACITANCE,
  CONDUCTANCE,
  CURRENT,
  divide,
  equal,
  LENGTH,
  multiply,
  nameOf,
  POWER,
  power,
  RESISTANCE,
  siUnitText,
  TEMPERATURE,
  TIME,
  VOLTAGE,
} from '../../../plugins/language/dimensions.ts';
import { fromSI, parseUnit, readUnitAt, toSI } from '../../../plugins/language/units.ts';

/** Prefixes of the SI brochure, 9th edition, table 7, as far as electronics uses them. */
const PREFIXES: readonly [string, number][] = [
  ['a', 1e-18],
  ['f', 1e-15],
  ['p', 1e-12],
  ['n', 1e-9],
  ['µ', 1e-6],
  ['m', 1e-3],
  ['', 1],
  ['k', 1e3],
  ['M', 1e6],
  ['G', 1e9],
  ['T', 1e12],
];

describe('dimensions', () => {
  test('derived units of the SI brochure, table 4, follow from each other', () => {
    expect(equal(multiply(VOLTAGE, CURRENT), POWER)).toBe(true);
    expect(equal(divide(VOLTAGE, CURRENT), RESISTANCE)).toBe(true);
    expect(equal(multiply(RESISTANCE, CAPACITANCE), TIME)).toBe(true);
    expect(VOLTAGE).toEqual({ metre: 2, kilogram: 1, second: -3, ampere: -1, kelvin: 0, candela: 0 });
    expect(CAPACITANCE).toEqual({ metre: -2, kilogram: -1, second: 4, ampere: 2, kelvin: 0, candela: 0 });
  });

  test('every SI text is read back as the same dimension', () => {
    const exponent = fc.integer({ min: -3, max: 3 });
    const arbitrary = fc.record({
      metre: exponent,
      kilogram: exponent,
      second: exponent,
      ampere: exponent,
      kelvin: exponent,
      candela: exponent,
    });
    fc.assert(
      fc.property(arbitrary, (dimension) => {
        const text = siUnitText(dimension);
        const unit = parseUnit(text === '' ? '1' : text);
        // Texts in base units, `kg⁻²·m`, may hold exponents beyond those that are read.
        if (unit) {
          expect(equal(unit.dimension, dimension)).toBe(true);
          expect(unit.factor).toBe(1);
        } else expect(text).toMatch(/[⁵⁶⁷⁸⁹]/);
      }),
    );
  });

  test('names are said with their articles', () => {
    expect(nameOf(VOLTAGE)).toBe('a voltage');
    expect(nameOf(divide(TEMPERATURE, POWER))).toBe('a thermal resistance');
    expect(nameOf(power(VOLTAGE, 2))).toBe('a quantity in V²');
  });
});

describe('units', () => {
  test.each(['V', 'A', 'Ω', 'F', 'H', 'W', 'J', 'C', 'S', 's', 'Hz', 'K', 'Wb', 'lx', 'cd', 'm', 'N'])(
    'every prefix of %s',
    (symbol) => {
      for (const [prefix, factor] of PREFIXES) {
        const unit = parseUnit(prefix + symbol);
        // `cd` with a prefix in front is a candela; `ms` a millisecond, never a metre times a second.
        expect(unit?.factor, prefix + symbol).toBe(factor);
        expect(unit?.text).toBe(prefix + symbol);
      }
    },
  );

  test.each([
    ['K/W', 1, divide(TEMPERATURE, POWER)],
    ['mA/V', 1e-3, CONDUCTANCE],
    ['V/µs', 1e6, divide(VOLTAGE, TIME)],
    ['mV/K', 1e-3, divide(VOLTAGE, TEMPERATURE)],
    ['mV/°C', 1e-3, divide(VOLTAGE, TEMPERATURE)],
    ['Ω·m', 1, multiply(RESISTANCE, LENGTH)],
    ['1/K', 1, power(TEMPERATURE, -1)],
    ['ppm/K', 1e-6, power(TEMPERATURE, -1)],
    ['%/K', 1e-2, power(TEMPERATURE, -1)],
    ['V²', 1, power(VOLTAGE, 2)],
    ['V^2', 1, power(VOLTAGE, 2)],
    // SI brochure, 9th edition, table 8.
    ['eV', 1.602176634e-19, multiply(VOLTAGE, multiply(CURRENT, TIME))],
    ['min', 60, TIME],
    ['h', 3600, TIME],
  ])('%s', (text, factor, dimension) => {
    const unit = parseUnit(text)!;
    expect(unit.factor).toBe(factor);
    expect(equal(unit.dimension, dimension)).toBe(true);
  });

  test('the ohm, the micro and the degree have several characters', () => {
    for (const ohm of ['Ω', '\u2126', 'ohm', 'Ohm']) expect(parseUnit(`k${ohm}`)).toEqual(parseUnit('kΩ'));
    for (const micro of ['u', '\u00b5', '\u03bc']) expect(parseUnit(`${micro}F`)).toEqual(parseUnit('µF'));
    expect(parseUnit('deg')).toEqual(parseUnit('°'));
    expect(parseUnit('\u2103')).toEqual(parseUnit('°C'));
  });

  test('prefixes are case-sensitive', () => {
    expect(parseUnit('mΩ')!.factor).toBe(1e-3);
    expect(parseUnit('MΩ')!.factor).toBe(1e6);
    expect(parseUnit('KΩ')).toBeUndefined();
    expect(parseUnit('Mhz')).toBeUndefined();
    expect(parseUnit('v')).toBeUndefined();
  });

  test('degrees Celsius are an offset scale, degrees of arc a fraction of the turn, decibels ratios', () => {
    expect(toSI(0, parseUnit('°C')!)).toBe(273.15);
    expect(toSI(-273.15, parseUnit('°C')!)).toBe(0);
    expect(toSI(180, parseUnit('°')!)).toBeCloseTo(Math.PI, 15);
    // 20 dB is a tenfold amplitude, by definition of the level of a field quantity (IEC 60027-3).
    expect(toSI(20, parseUnit('dB')!)).toBeCloseTo(10, 14);
    expect(fromSI(0.1, parseUnit('dB')!)).toBeCloseTo(-20, 14);
  });

  test('a decimal number in a prefixed unit is the nearest double', () => {
    expect(toSI(100, parseUnit('nF')!)).toBe(1e-7);
    expect(toSI(2.2, parseUnit('µF')!)).toBe(2.2e-6);
    expect(toSI(4.7, parseUnit('kΩ')!)).toBe(4700);
  });

  test.each([
    ['mA * R1.value', 'mA'],
    ['V/C1.v', 'V'],
    ['V/lamp', 'V'],
    ['V/s', 'V/s'],
    ['%/K)', '%/K'],
    ['V^2', 'V'],
    ['mA@steady', 'mA'],
    ['V.', 'V'],
  ])('in an expression, %s begins with %s', (text, unit) => {
    expect(readUnitAt(text, 0)!.end).toBe(unit.length);
  });

  test.each(['and', 'm_x', 'lamp', 'V1', 'C.v', ''])('in an expression, %s is no unit', (text) => {
    expect(readUnitAt(text, 0)).toBeUndefined();
  });

  test('no text makes it throw, and a unit that is read ends within the text', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary', maxLength: 12 }), fc.nat(12), (text, start) => {
        parseUnit(text);
        const read = readUnitAt(text, start);
        if (read) expect(read.end).toBeLessThanOrEqual(text.length);
      }),
    );
  });
});
